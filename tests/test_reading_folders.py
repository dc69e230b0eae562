"""Complaints about files and folders as a whole, as whole text."""

import os
import shutil
import sys
from pathlib import Path

import pytest

from bufferfolio.errors import DefinitionErrors
from bufferfolio.reading import read_library

LIBRARY = Path(__file__).parent / "broken" / "library"
GOOD = Path(__file__).parent / "broken" / "good"


@pytest.fixture
def folder(tmp_path, monkeypatch):
    """Give a folder `mine` beside a copy of the library; messages name files from here."""
    shutil.copytree(LIBRARY, tmp_path / "library")
    for kind in ("families", "reagents", "formulations"):
        (tmp_path / "mine" / kind).mkdir(parents=True)
    monkeypatch.chdir(tmp_path)
    return Path("mine")


def complaints(folder, base=Path("library")):
    with pytest.raises(DefinitionErrors) as caught:
        read_library(folder, base)
    return str(caught.value)


def add(path, kind):
    path.parent.mkdir(parents=True, exist_ok=True)
    shutil.copyfile(GOOD / f"{kind}.yaml", path)


def test_missing_folder(folder):
    assert complaints(folder / "other") == (
        "mine/other:1:1: there is no such folder\n"
        "accepted: a folder with formulations/, and families/, reagents/, sources.yaml"
    )


def test_file_in_place_of_a_folder(folder):
    (folder / "note").write_text("", encoding="utf-8")
    assert complaints(folder / "note") == (
        "mine/note:1:1: this is not a folder\n"
        "accepted: a folder with formulations/, and families/, reagents/, sources.yaml"
    )


def test_folder_without_definitions(folder):
    (folder / "elsewhere" / "deeper").mkdir(parents=True)
    assert complaints(folder / "elsewhere") == (
        "mine/elsewhere:1:1: the folder holds no definitions\n"
        "accepted: a folder with families, reagents, formulations, evidence, sources.yaml, "
        "interactions.yaml, or some of them"
    )


def test_misspelt_folder_and_stray_file(folder):
    (folder / "formulation").mkdir()
    (folder / "drafts").mkdir()
    (folder / "source.yaml").write_text("", encoding="utf-8")
    assert complaints(folder) == (
        "mine/formulation:1:1: unknown folder; did you mean 'formulations'?\n"
        "accepted: families, reagents, formulations, evidence\n"
        "\n"
        "mine/source.yaml:1:1: a file of this name is not read; did you mean 'sources.yaml'?\n"
        "accepted: sources.yaml, interactions.yaml; all other definitions in families, reagents, "
        "formulations, evidence"
    )


def test_key_of_the_library_used_again(folder):
    add(folder / "reagents" / "sodium-chloride.yaml", "reagent")
    assert complaints(folder) == (
        "mine/reagents/sodium-chloride.yaml:1:1: "
        "'sodium-chloride' is already defined in library/reagents/sodium-chloride.yaml\n"
        "accepted: another file name"
    )


def test_the_same_file_twice_is_no_clash(folder):
    for name in ("reagents/sodium-chloride.yaml", "families/acetate.yaml", "sources.yaml"):
        shutil.copyfile(LIBRARY / name, folder / name)
    shutil.copyfile(LIBRARY / "interactions.yaml", folder / "interactions.yaml")
    assert read_library(folder, Path("library")).reagents.keys() == {
        path.stem for path in (LIBRARY / "reagents").iterdir()
    }


def test_the_same_key_in_two_folders(folder):
    add(folder / "families" / "acids" / "propionate.yaml", "family")
    add(folder / "families" / "old" / "propionate.yaml", "reagent")
    assert complaints(folder) == (
        "mine/families/old/propionate.yaml:1:1: "
        "'propionate' is already defined in mine/families/acids/propionate.yaml\n"
        "accepted: another file name"
    )


def test_names_that_are_no_keys(folder):
    add(folder / "families" / "propionate.yml", "family")
    add(folder / "reagents" / "Soda Ash.yaml", "reagent")
    add(folder / "reagents" / ".hidden.yaml", "reagent")
    (folder / "reagents" / "readme.txt").write_text("not read", encoding="utf-8")
    assert complaints(folder) == (
        "mine/families/propionate.yml:1:1: the file name ends in '.yml'\n"
        "accepted: the ending .yaml\n"
        "\n"
        "mine/reagents/Soda Ash.yaml:1:1: 'Soda Ash' cannot be a key\n"
        "accepted: lower-case letters, digits and single hyphens, such as sodium-chloride"
    )


def test_huge_file(folder):
    path = folder / "formulations" / "huge.yaml"
    path.write_bytes(b"#" * 1_000_001)
    assert complaints(folder) == (
        "mine/formulations/huge.yaml:1:1: the file is too large (1000001 bytes)\n"
        "accepted: at most 1000000 bytes"
    )


def test_link_to_nowhere(folder):
    try:
        (folder / "formulations" / "lost.yaml").symlink_to("nowhere.yaml")
    except OSError:
        pytest.skip("this system makes no symbolic links")
    assert complaints(folder) == (
        "mine/formulations/lost.yaml:1:1: there is no such file\naccepted: the name of a file"
    )


@pytest.mark.skipif(sys.platform == "win32", reason="pipes have no name in a folder there")
def test_pipe_does_not_hang(folder):
    os.mkfifo(folder / "formulations" / "pipe.yaml")
    assert complaints(folder) == (
        "mine/formulations/pipe.yaml:1:1: this is not a file\naccepted: a YAML file"
    )


@pytest.mark.skipif(sys.platform == "win32", reason="reading cannot be forbidden by mode there")
def test_unreadable_file(folder, monkeypatch):
    path = folder / "formulations" / "secret.yaml"
    add(path, "formulation")

    # The superuser may read everything, so the refusal itself is put in place of the mode.
    def refuse(self):
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr(Path, "read_bytes", refuse)
    shutil.rmtree("library")
    Path("library").mkdir()
    assert complaints(folder) == (
        "mine/formulations/secret.yaml:1:1: the file cannot be read: Permission denied\n"
        "accepted: a file that may be read"
    )


def test_errors_of_all_files_come_together_in_order(folder):
    for name in ("b", "a", "c"):
        path = folder / "formulations" / f"{name}.yaml"
        path.write_text("title: A\nmodel: davis\n", encoding="utf-8")
    with pytest.raises(DefinitionErrors) as caught:
        read_library(folder, Path("library"))
    errors = caught.value.errors
    assert [error.place for error in errors] == sorted(error.place for error in errors)
    assert {error.place.file for error in errors} == {
        f"mine/formulations/{name}.yaml" for name in "abc"
    }
