/* Water itself: density, permittivity, its ionisation and the Debye–Hückel coefficient.
 * The twin of water.py, for one temperature. */
(function (bf) {
  "use strict";

  const ZERO_CELSIUS = 273.15; // K
  const MOLAR_MASS = 0.018015268; // kg/mol, the value that R11-07 and R8-97 use

  // CODATA 2018, exact since the SI of 2019 but for the electric constant.
  const ELEMENTARY_CHARGE = 1.602176634e-19; // C
  const BOLTZMANN = 1.380649e-23; // J/K
  const AVOGADRO = 6.02214076e23; // 1/mol
  const VACUUM_PERMITTIVITY = 8.8541878128e-12; // F/m

  /** The density of pure water at one atmosphere. Mirrors `density` in water.py.
   * Source: Kell, J. Chem. Eng. Data 20 (1975) 97, equation 16.
   * @param {number} temperature K, made for 0 to 150 °C and smooth a few kelvin below
   * @returns {number} kg/m3
   */
  function density(temperature) {
    return densityAndSlope(temperature).value;
  }

  /** The density of pure water, and how it changes with temperature. Mirrors `density_and_slope`.
   * Source: as `density`.
   * @param {number} temperature K
   * @returns {{value: number, slope: number}} kg/m3 and kg/(m3 K)
   */
  function densityAndSlope(temperature) {
    const t = temperature - ZERO_CELSIUS;
    const [a, b, c] = [999.83952, 16.945176, -7.9870401e-3];
    const [d, e, f] = [-46.170461e-6, 105.56302e-9, -280.54253e-12];
    const numerator = a + t * (b + t * (c + t * (d + t * (e + f * t))));
    const rising = b + t * (2 * c + t * (3 * d + t * (4 * e + 5 * f * t)));
    const denominator = 1 + 16.87985e-3 * t;
    const value = numerator / denominator;
    return { value, slope: (rising - value * 16.87985e-3) / denominator };
  }

  // IAPWS R8-97, table of N, i and j for k = 1 ... 11.
  const DIPOLE_TERMS = [
    [0.978224486826, 1, 0.25],
    [-0.957771379375, 1, 1.0],
    [0.237511794148, 1, 2.5],
    [0.714692244396, 2, 1.5],
    [-0.298217036956, 3, 1.5],
    [-0.108863472196, 3, 2.5],
    [0.0949327488264, 4, 2.0],
    [-0.00980469816509, 5, 2.0],
    [1.6516763497e-5, 6, 5.0],
    [9.37359795772e-5, 7, 0.5],
    [-1.2317921872e-10, 10, 10.0],
  ];

  /** The static relative permittivity of water at one atmosphere. Mirrors `permittivity`.
   * Source: IAPWS R8-97; Fernández et al., J. Phys. Chem. Ref. Data 26 (1997) 1125.
   * @param {number} temperature K, made for 238 to 873 K
   * @returns {number} dimensionless
   */
  function permittivity(temperature) {
    return permittivityAndSlope(temperature).value;
  }

  /** The relative permittivity of water, and how it changes with temperature.
   * Mirrors `permittivity_and_slope`.
   * Source: as `permittivity`.
   * @param {number} temperature K
   * @returns {{value: number, slope: number}} dimensionless and 1/K
   */
  function permittivityAndSlope(temperature) {
    const { value: rho, slope: rhoSlope } = densityAndSlope(temperature);
    const growth = rhoSlope / rho; // of the density, 1/K
    const delta = rho / 322;
    const tau = 647.096 / temperature;
    const amount = rho / MOLAR_MASS;
    let g = 1 + 0.00196096504426 * delta * (temperature / 228 - 1) ** -1.2;
    let gSlope = (g - 1) * (growth - 1.2 / (temperature - 228));
    for (const [factor, i, j] of DIPOLE_TERMS) {
      const term = factor * delta ** i * tau ** j;
      g += term;
      gSlope += term * (i * growth - j / temperature);
    }
    // The release fixes its own (older) constants; newer ones would shift the result.
    const a =
      (6.0221367e23 * 6.138e-30 ** 2 * amount * g) /
      (8.854187817e-12 * 1.380658e-23 * temperature);
    const b = (6.0221367e23 * 1.636e-40 * amount) / (3 * 8.854187817e-12);
    const aSlope = a * (growth + gSlope / g - 1 / temperature);
    const bSlope = b * growth;
    const root = Math.sqrt(9 + 2 * a + 18 * b + a * a + 10 * a * b + 9 * b * b);
    const rootSlope = ((1 + a + 5 * b) * aSlope + (9 + 5 * a + 9 * b) * bSlope) / root;
    const value = (1 + a + 5 * b + root) / (4 - 4 * b);
    const rising = aSlope + 5 * bSlope + rootSlope + 4 * bSlope * value;
    return { value, slope: rising / (4 - 4 * b) };
  }

  /** The Debye–Hückel coefficient A for decadic logarithms and molalities.
   * Mirrors `debye_huckel`.
   * Source: limiting law from the constants above, SI form (Robinson & Stokes, ch. 9).
   * @param {number} temperature K
   * @returns {number} (kg/mol)^0.5
   */
  function debyeHuckel(temperature) {
    return debyeHuckelAndSlope(temperature).value;
  }

  /** The Debye–Hückel coefficient A, and how it changes with temperature.
   * Mirrors `debye_huckel_and_slope`.
   * Source: as `debyeHuckel`.
   * @param {number} temperature K
   * @returns {{value: number, slope: number}} (kg/mol)^0.5 and (kg/mol)^0.5/K
   */
  function debyeHuckelAndSlope(temperature) {
    const rho = densityAndSlope(temperature);
    const epsilon = permittivityAndSlope(temperature);
    const bjerrum =
      ELEMENTARY_CHARGE ** 2 /
      (4 * Math.PI * VACUUM_PERMITTIVITY * epsilon.value * BOLTZMANN * temperature);
    const value =
      (bjerrum ** 1.5 * Math.sqrt(2 * Math.PI * AVOGADRO * rho.value)) / Math.LN10;
    const growth =
      (0.5 * rho.slope) / rho.value - 1.5 * (epsilon.slope / epsilon.value + 1 / temperature);
    return { value, slope: value * growth };
  }

  /** −log10 of the ionisation constant of water at one atmosphere. Mirrors `pKw_at`.
   * Source: IAPWS R11-07(2019); Bandura & Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15.
   * @param {number} temperature K, made for 0 to 800 °C
   * @returns {number} dimensionless, molal standard state
   */
  function pKwAt(temperature) {
    return pKwAndSlope(temperature).value;
  }

  /** pKw at one atmosphere, and how it changes with temperature. Mirrors `pKw_and_slope`.
   * Source: as `pKwAt`.
   * @param {number} temperature K
   * @returns {{value: number, slope: number}} dimensionless and 1/K
   */
  function pKwAndSlope(temperature) {
    const rho = densityAndSlope(temperature);
    return pKwWith(temperature, rho.value, rho.slope);
  }

  /** −log10 of the ionisation constant of water of a given density.
   * Mirrors `pKw_at_density`.
   * Source: IAPWS R11-07(2019); Bandura & Lvov, J. Phys. Chem. Ref. Data 35 (2006) 15.
   * @param {number} temperature K
   * @param {number} waterDensity kg/m3, up to 1250
   * @returns {number} dimensionless, molal standard state
   */
  function pKwAtDensity(temperature, waterDensity) {
    return pKwWith(temperature, waterDensity, 0).value;
  }

  /**
   * @param {number} temperature K
   * @param {number} waterDensity kg/m3
   * @param {number} densitySlope kg/(m3 K)
   * @returns {{value: number, slope: number}}
   */
  function pKwWith(temperature, waterDensity, densitySlope) {
    const rho = waterDensity / 1000;
    const rhoSlope = densitySlope / 1000;
    const crowding = (22786.2 * rho ** (2 / 3)) / temperature ** 2;
    const q = rho * Math.exp(-0.864671 + 8659.19 / temperature - crowding);
    const growth = rhoSlope / rho;
    const qSlope =
      q * (growth - 8659.19 / temperature ** 2 - crowding * (growth / 1.5 - 2 / temperature));
    const gas =
      0.61415 + (48251.33 + (-67707.93 + 10102100 / temperature) / temperature) / temperature;
    const gasSlope =
      (-48251.33 + (2 * 67707.93 - (3 * 10102100) / temperature) / temperature) /
      temperature ** 2;
    const pull = 0.642044 - 56.8534 / temperature - 0.375754 * rho;
    const pullSlope = 56.8534 / temperature ** 2 - 0.375754 * rhoSlope;
    const share = q / (q + 1);
    const bracket = Math.log10(1 + q) - share * rho * pull;
    const bracketSlope =
      (qSlope / (q + 1)) * (1 / Math.LN10 - (rho * pull) / (q + 1)) -
      share * (rhoSlope * pull + rho * pullSlope);
    const value = -12 * bracket + gas + 2 * Math.log10(MOLAR_MASS);
    return { value, slope: -12 * bracketSlope + gasSlope };
  }

  bf.water = {
    ZERO_CELSIUS,
    MOLAR_MASS,
    density,
    densityAndSlope,
    permittivity,
    permittivityAndSlope,
    debyeHuckel,
    debyeHuckelAndSlope,
    pKwAt,
    pKwAndSlope,
    pKwAtDensity,
  };
})((globalThis.bufferfolio = globalThis.bufferfolio || {}));
