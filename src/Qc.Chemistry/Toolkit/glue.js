// Runs inside V8, beside the toolkit's WebAssembly module. Gives .NET two functions that take and give text.
// Every toolkit object is deleted where it was made: the garbage collector does not reach the module's memory.

let compiled = null;
let toolkit = null;
let log = null;
let startFailure = null;

// The toolkit's start code asks for these few things of a browser.
globalThis.window = globalThis;
globalThis.self = globalThis;
globalThis.console = { log() {}, info() {}, warn() {}, error() {}, debug() {} };
globalThis.performance = { now: () => Date.now() };

// Compiled here and now: the promise of WebAssembly.instantiate is settled by way of the host's thread pool,
// and on a busy host that can take for ever.
function qcCompile(bytes) {
  compiled = new WebAssembly.Module(bytes);
}

// Makes a fresh instance with memory of its own; an earlier one is left to the garbage collector.
function qcStart() {
  toolkit = null;
  log = null;
  startFailure = null;
  const settings = {
    locateFile: name => name,
    print() {},
    printErr() {},
    instantiateWasm(imports, done) {
      done(new WebAssembly.Instance(compiled, imports), compiled);
      return {};
    },
  };
  initRDKitModule(settings).then(
    module => {
      log = module.set_log_capture("rdApp.error");
      toolkit = module;
    },
    error => { startFailure = String(error); });
}

// "ready", or why it failed, or "" while a promise is left unsettled (which would be a fault: nothing is waited for).
function qcState() {
  return startFailure ?? (toolkit === null ? "" : "ready");
}

// A C++ exception of the toolkit is an answer about the input; anything else thrown means the module is not to be trusted.
const refusalOrThrow = error => {
  if (error instanceof WebAssembly.Exception) {
    return JSON.stringify({ refused: log.get_buffer() });
  }
  throw error;
};

const withMolecule = (text, use) => {
  let molecule = null;
  try {
    log.clear_buffer();
    molecule = toolkit.get_mol(text);
    return molecule === null ? JSON.stringify({ refused: log.get_buffer() }) : use(molecule);
  } catch (error) {
    return refusalOrThrow(error);
  } finally {
    molecule?.delete();
  }
};

// Whether the text can be read at all, and what the toolkit made of it, before anything is rewritten.
function qcInspect(text) {
  return withMolecule(text, molecule => JSON.stringify({ graph: JSON.parse(molecule.get_json()) }));
}

// Canonical SMILES without hydrogens that only state what valence implies.
// removeDefiningBondStereo: an imine's hydrogen is counted on its nitrogen, at the price of its E or Z.
function qcCanonical(text) {
  return withMolecule(text, molecule => {
    molecule.remove_hs_in_place(JSON.stringify({ removeDefiningBondStereo: true }));
    return JSON.stringify({ smiles: molecule.get_smiles() });
  });
}

// Everything about a canonical SMILES, in the atom order of that SMILES.
function qcDescribe(smiles) {
  return withMolecule(smiles, molecule => {
    const inchi = molecule.get_inchi();
    return JSON.stringify({
      smiles: molecule.get_smiles(),
      graph: JSON.parse(molecule.get_json()),
      stereo: JSON.parse(molecule.get_stereo_tags()),
      inchi,
      inchiKey: inchi === "" ? "" : toolkit.get_inchikey_for_inchi(inchi),
      molBlock: molecule.get_molblock(),
    });
  });
}

function qcDraw(text, details) {
  return withMolecule(text, molecule => JSON.stringify({ svg: molecule.get_svg_with_highlights(details) }));
}
