// Reads a results folder with a Parquet reader that shares no code with the program, and checks
// what was written against itself: every column of every table can be read, scalars.parquet says
// what summary.json says, and the ion energy distributions integrate to the fluxes.
//
//   npm ci
//   node check.mjs [--json] DIR
//
// Exit status: 0 all is well, 1 a check failed (the messages say which), 2 wrong command line.
import { readdir, readFile } from 'node:fs/promises'
import { join } from 'node:path'
import process, { argv, exit } from 'node:process'
import { asyncBufferFromFile, parquetMetadataAsync, parquetReadObjects } from 'hyparquet'
import { compressors } from 'hyparquet-compressors'

const fluxTolerance = 1e-9 // relative: only the order of the sum differs

/** Reads one table: its columns as arrays and the metadata of the file. */
async function readTable(path) {
  const file = await asyncBufferFromFile(path)
  const metadata = await parquetMetadataAsync(file)
  const names = metadata.schema.slice(1).map(column => column.name)
  const columns = Object.fromEntries(names.map(name => [name, []]))
  // A dot in a name is no nesting here, so columns are not selected by name: all are read.
  for (const row of await parquetReadObjects({ file, metadata, compressors })) {
    for (const [name, value] of Object.entries(row)) columns[name]?.push(value)
  }
  const labels = Object.fromEntries(
    (metadata.key_value_metadata ?? []).map(({ key, value }) => [key, value]))
  return { names, columns, labels, rows: Number(metadata.num_rows) }
}

/** Describes a column in a line and reports what makes it unusable. */
function describe(table, name, values, rows, faults) {
  const place = `${table}: column ${name}`
  if (values.length !== rows) faults.push(`${place}: ${values.length} values in ${rows} rows`)
  if (values.length === 0) faults.push(`${place}: no values`)
  const missing = values.filter(v => v === null || v === undefined).length
  if (missing > 0) faults.push(`${place}: ${missing} values are missing`)
  if (typeof values[0] === 'string') {
    return { name, type: 'text', count: values.length, distinct: new Set(values).size }
  }
  const type = typeof values[0] === 'bigint' ? 'int' : 'float'
  const known = values.filter(v => v === v && v !== null && v !== undefined)
  if (values.length > 0 && known.length === 0) faults.push(`${place}: every value is NaN`)
  const [min, max] = known.reduce(([a, b], v) => [v < a ? v : a, v > b ? v : b],
    [known[0], known[0]])
  return { name, type, count: values.length, nan: values.length - known.length, min, max }
}

/** Compares the labels of a table with its columns. */
function checkLabels(name, table, faults) {
  let labels
  try {
    labels = JSON.parse(table.labels.columns)
  } catch {
    faults.push(`${name}: no labels of its columns in the metadata`)
    return
  }
  const labelled = labels.map(label => label.name).join(', ')
  if (labelled !== table.names.join(', ')) {
    faults.push(`${name}: columns ${table.names.join(', ')}, labels ${labelled}`)
  }
}

const isLeaf = node => ['value', 'se', 'unit'].every(key => key in node) &&
  Object.keys(node).length === 3

/** Returns the leaves of the results as [path, leaf], each checked to be an object. */
function leaves(node, prefix, faults) {
  return Object.entries(node).flatMap(([key, child]) => {
    const path = prefix ? `${prefix}.${key}` : key
    if (child === null || typeof child !== 'object') {
      faults.push(`summary.json: results.${path} is ${child}, want an object`)
      return []
    }
    return isLeaf(child) ? [[path, child]] : leaves(child, path, faults)
  })
}

/** NaN in a table is null in JSON, as is infinity, which JSON lacks too. */
const equalNumber = (cell, json) => json === null ? !Number.isFinite(cell) : cell === json

/** Compares scalars.parquet with the results of the summary, leaf by leaf, both ways. */
function checkScalars(scalars, summary, faults) {
  const want = new Map(leaves(summary.results ?? {}, '', faults))
  const seen = new Set()
  const { path = [], value = [], se = [], unit = [] } = scalars.columns
  path.forEach((name, i) => {
    const leaf = want.get(name)
    if (seen.has(name)) faults.push(`scalars.parquet: ${name} stands twice`)
    seen.add(name)
    if (!leaf) {
      faults.push(`scalars.parquet: ${name} is not in summary.json`)
    } else if (!equalNumber(value[i], leaf.value) || !equalNumber(se[i], leaf.se) ||
      unit[i] !== leaf.unit) {
      faults.push(`scalars.parquet: ${name} is ${value[i]} +- ${se[i]} ${unit[i]}, ` +
        `summary.json has ${leaf.value} +- ${leaf.se} ${leaf.unit}`)
    }
  })
  for (const name of want.keys()) {
    if (!seen.has(name)) faults.push(`scalars.parquet: ${name} of summary.json is missing`)
  }
  return want.size
}

/** Integrates the distributions: the flux and the mean energy per electrode and species. */
function integrate({ columns }) {
  const sums = new Map()
  columns.electrode.forEach((electrode, i) => {
    const key = `${electrode}.${columns.species[i]}`
    const sum = sums.get(key) ?? { flux: 0, energy: 0, width: 0 }
    const flux = columns.flux_m2pseV[i] * columns.width_eV[i]
    sum.flux += flux
    sum.energy += flux * columns.energy_eV[i]
    if (flux !== 0) sum.width = Math.max(sum.width, columns.width_eV[i])
    sums.set(key, sum)
  })
  return sums
}

/** Compares the integrals with the results of the same electrode and species. */
function checkIons(table, summary, faults) {
  const wanted = ['electrode', 'species', 'energy_eV', 'width_eV', 'flux_m2pseV']
  const absent = wanted.filter(name => !(name in table.columns))
  if (absent.length > 0) {
    faults.push(`ion_energy.parquet: no column ${absent.join(', ')}`)
    return 0
  }
  const results = new Map(leaves(summary.results ?? {}, '', []))
  let compared = 0
  for (const [key, sum] of integrate(table)) {
    const flux = results.get(`ion_flux_m2ps.${key}`)?.value
    const energy = results.get(`ion_mean_energy_eV.${key}`)?.value
    if (flux !== undefined && flux !== null) {
      compared++
      if (!(Math.abs(sum.flux - flux) <= fluxTolerance * Math.abs(flux))) {
        faults.push(`ion_energy.parquet: ${key} integrates to ${sum.flux} 1/(m2 s), ` +
          `summary.json has ${flux}`)
      }
    }
    if (energy !== undefined && energy !== null) {
      compared++
      const mean = sum.energy / sum.flux
      if (!(Math.abs(mean - energy) <= sum.width / 2)) {
        faults.push(`ion_energy.parquet: ${key} has the mean energy ${mean} eV, ` +
          `summary.json has ${energy}, half a bin is ${sum.width / 2}`)
      }
    }
  }
  if (compared === 0) faults.push('ion_energy.parquet: nothing in it is in summary.json')
  return compared
}

/** Checks a folder and returns the report; its faults are empty when all is well. */
async function check(dir) {
  const faults = []
  const report = { dir, tables: [], scalars: 0, distributions: 0, faults }
  const files = (await readdir(dir)).filter(name => name.endsWith('.parquet')).sort()
  if (files.length === 0) faults.push(`${dir}: no *.parquet`)
  const tables = {}
  for (const name of files) {
    try {
      tables[name] = await readTable(join(dir, name))
    } catch (error) {
      faults.push(`${name}: ${error.message}`)
      continue
    }
    const { names, columns, rows } = tables[name]
    checkLabels(name, tables[name], faults)
    report.tables.push({ name, rows,
      columns: names.map(column => describe(name, column, columns[column], rows, faults)) })
  }
  const summary = JSON.parse(await readFile(join(dir, 'summary.json'), 'utf8'))
  if (tables['scalars.parquet']) {
    report.scalars = checkScalars(tables['scalars.parquet'], summary, faults)
  } else {
    faults.push(`${dir}: no readable scalars.parquet`)
  }
  if (tables['ion_energy.parquet']) {
    report.distributions = checkIons(tables['ion_energy.parquet'], summary, faults)
  }
  return report
}

/** Prints a line a column. */
function print(report) {
  for (const { name, rows, columns } of report.tables) {
    console.log(`${name}: ${rows} rows`)
    for (const c of columns) {
      const range = c.type === 'text' ? `${c.distinct} distinct` :
        `min ${c.min}, max ${c.max}, ${c.nan} NaN`
      console.log(`  ${c.name} (${c.type}): ${c.count} values, ${range}`)
    }
  }
  console.log(`${report.scalars} scalars compared with summary.json, ` +
    `${report.distributions} integrals of distributions`)
}

/** JSON has no NaN, no infinity and no 64-bit integers: those are texts in the report. */
const replacer = (_, value) => typeof value === 'bigint' ||
  typeof value === 'number' && !Number.isFinite(value) ? String(value) : value

const args = argv.slice(2)
const json = args[0] === '--json'
if (json) args.shift()
if (args.length !== 1 || args[0].startsWith('-')) {
  console.error('usage: node check.mjs [--json] DIR')
  exit(2)
}
try {
  const report = await check(args[0])
  if (json) console.log(JSON.stringify(report, replacer, 1))
  else print(report)
  for (const fault of report.faults) console.error(`check.mjs: ${fault}`)
  process.exitCode = report.faults.length > 0 ? 1 : 0
} catch (error) {
  console.error(`check.mjs: ${args[0]}: ${error.message}`)
  process.exitCode = 1
}
