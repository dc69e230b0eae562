"""A generated folder is replaced as a whole, and only if it is one."""

import hashlib
from pathlib import Path

import pytest

from bufferfolio.writing import MARK, README, CannotWrite, replace_folder


def write(out: Path, **files: str) -> None:
    with replace_folder(out) as fresh:
        for name, text in files.items():
            path = fresh / name.replace("__", "/")
            path.parent.mkdir(exist_ok=True)
            path.write_text(text, encoding="utf-8")


def files_below(folder: Path) -> list[str]:
    return sorted(path.relative_to(folder).as_posix() for path in folder.rglob("*"))


def test_a_new_folder_holds_what_was_written_and_two_notes(tmp_path: Path) -> None:
    write(tmp_path / "far" / "dist", page="one", assets__style="two")
    expected = ["README.txt", "assets", "assets/style", "contents.txt", "page"]
    assert files_below(tmp_path / "far" / "dist") == expected
    assert files_below(tmp_path / "far")[0] == "dist", "nothing else is left beside the folder"


def test_the_folder_replaces_the_one_before_it(tmp_path: Path) -> None:
    out = tmp_path / "dist"
    write(out, old="1", page="1")
    write(out, page="2")
    assert files_below(out) == ["README.txt", "contents.txt", "page"]
    assert (out / "page").read_text() == "2"


@pytest.mark.parametrize("trouble", [ValueError, KeyboardInterrupt])
def test_a_failure_leaves_the_old_folder_whole(
    tmp_path: Path, trouble: type[BaseException]
) -> None:
    out = tmp_path / "dist"
    write(out, page="1")

    def fail_half_way() -> None:
        with replace_folder(out) as fresh:
            (fresh / "page").write_text("half")
            raise trouble

    with pytest.raises(trouble):
        fail_half_way()
    assert (out / "page").read_text() == "1"
    assert [path.name for path in tmp_path.iterdir()] == ["dist"]


def test_the_old_folder_comes_back_when_the_swap_is_interrupted(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    out = tmp_path / "dist"
    write(out, page="1")
    rename = Path.rename

    def interrupted(self: Path, target: Path) -> Path:
        if ".new-" in self.name:
            raise KeyboardInterrupt
        return rename(self, target)

    monkeypatch.setattr(Path, "rename", interrupted)
    with pytest.raises(KeyboardInterrupt):
        write(out, page="2")
    assert (out / "page").read_text() == "1"
    assert [path.name for path in tmp_path.iterdir()] == ["dist"]


def test_a_folder_of_somebody_else_is_refused_and_kept(tmp_path: Path) -> None:
    (tmp_path / "notes.txt").write_text("mine")
    with pytest.raises(CannotWrite) as refusal:
        write(tmp_path, page="1")
    assert str(refusal.value) == (
        f"{tmp_path} holds files that bufferfolio did not write (notes.txt); "
        "move them away or choose another folder"
    )
    assert files_below(tmp_path) == ["notes.txt"]


def test_a_readme_of_somebody_else_is_no_mark(tmp_path: Path) -> None:
    (tmp_path / "README.txt").write_text("My notes\n" + MARK)
    with pytest.raises(CannotWrite, match=r"README\.txt"):
        write(tmp_path, page="1")


def test_files_added_to_a_generated_folder_are_not_lost(tmp_path: Path) -> None:
    out = tmp_path / "dist"
    write(out, page="1")
    for number in range(5):
        (out / f"mine-{number}").write_text("x")
    with pytest.raises(CannotWrite) as refusal:
        write(out, page="2")
    assert "(mine-0, mine-1, mine-2 and 2 more)" in str(refusal.value)
    assert (out / "mine-4").exists()
    assert (out / "page").read_text() == "1"


def test_a_fresh_clone_with_nothing_but_the_note_is_filled(tmp_path: Path) -> None:
    out = tmp_path / "dist"
    out.mkdir()
    (out / "README.txt").write_text(README, encoding="utf-8")
    (out / ".DS_Store").write_text("left by a desktop")
    write(out, page="1")
    assert "page" in files_below(out)


def test_a_file_in_place_of_the_folder_is_refused(tmp_path: Path) -> None:
    out = tmp_path / "dist"
    out.write_text("a file")
    with pytest.raises(CannotWrite, match="is a file; give the name of a folder"):
        write(out)


def test_a_parent_that_is_a_file_is_refused(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("a file")
    with pytest.raises(CannotWrite, match="cannot write beside"):
        write(tmp_path / "file" / "dist")


def test_contents_list_every_file_by_name_with_its_hash(tmp_path: Path) -> None:
    write(tmp_path / "dist", page="one", assets__style="ü")
    lines = (tmp_path / "dist" / "contents.txt").read_text(encoding="utf-8").splitlines()
    assert [line.split("  ")[1] for line in lines] == ["README.txt", "assets/style", "page"]
    assert lines[1].split("  ")[0] == hashlib.sha256("ü".encode()).hexdigest()


def test_the_same_input_gives_the_same_bytes(tmp_path: Path) -> None:
    for name in ("one", "two"):
        write(tmp_path / name, page="1", b="2", a__b="3")
    for file in ("README.txt", "contents.txt"):
        assert (tmp_path / "one" / file).read_bytes() == (tmp_path / "two" / file).read_bytes()


def test_the_note_in_the_repository_is_the_one_that_is_written() -> None:
    note = Path(__file__).parents[1] / "dist" / "README.txt"
    assert note.read_text(encoding="utf-8") == README
