// Compares states of moist air on standard input with psychrolib, within 0.1 %. The library's folder is the argument.
// Temperatures are compared within 0.02 K, which is tighter than 0.1 % of any of them in K; both programs find them by
// iteration, the library to 0.001 K.
'use strict';

const { readFileSync } = require('node:fs');
const psychrolib = require(process.argv[2]);

const SHARE = 1e-3;
const KELVIN = 0.02;

psychrolib.SetUnitSystem(psychrolib.SI);
const [head, ...lines] = readFileSync(0, 'utf8').trim().split('\n');
const names = head.split(',');
const largest = {};
let failures = 0;
let ambiguous = 0;

function compare(name, got, want, allowed, at) {
  const miss = Math.abs(got - want);
  largest[name] = Math.max(largest[name] ?? 0, miss / allowed);
  if (!(miss <= allowed)) {
    failures += 1;
    console.error(`${at}: ${name} ${got}, library ${want}`);
  }
}

for (const line of lines) {
  const row = Object.fromEntries(line.split(',').map((text, i) => [names[i], Number(text)]));
  const { pressure_Pa: p, temperature_C: t, relative_humidity: phi } = row;
  const at = `${p} Pa, ${t} °C, ${phi}`;
  const W = psychrolib.GetHumRatioFromRelHum(t, phi, p);
  const h = psychrolib.GetMoistAirEnthalpy(t, W);
  const pairs = {
    saturation_pressure_Pa: psychrolib.GetSatVapPres(t),
    humidity_ratio: W,
    volume_m3_kg: psychrolib.GetMoistAirVolume(t, W, p),
    density_kg_m3: psychrolib.GetMoistAirDensity(t, W, p),
  };
  for (const [name, want] of Object.entries(pairs)) compare(name, row[name], want, SHARE * Math.abs(want), at);
  compare('enthalpy_J_kg', row.enthalpy_J_kg, h, SHARE * Math.max(Math.abs(h), 1000), at); // passes through zero
  compare('dew_point_C', row.dew_point_C, psychrolib.GetTDewPointFromHumRatio(t, W, p), KELVIN, at);
  // Between the two equations of the wet bulb, over water and over ice, lies a band around 0 °C in which air has one of each.
  if (t > 0 && W >= psychrolib.GetHumRatioFromTWetBulb(t, 0, p) && W <= psychrolib.GetHumRatioFromTWetBulb(t, -1e-9, p)) {
    ambiguous += 1;
    continue;
  }
  compare('wet_bulb_C', row.wet_bulb_C, psychrolib.GetTWetBulbFromHumRatio(t, W, p), KELVIN, at);
}

if (lines.length < 500) {
  console.error(`only ${lines.length} states`);
  failures += 1;
}
console.log(`${lines.length} states, wet bulb not compared in ${ambiguous} between water and ice; largest deviations as shares of what is allowed:`);
for (const [name, share] of Object.entries(largest)) console.log(`  ${name} ${share.toPrecision(2)}`);
process.exit(failures === 0 ? 0 : 1);
