#include "probe/link.h"

#include <llvm/Bitcode/BitcodeReader.h>
#include <llvm/Bitcode/BitcodeWriter.h>
#include <llvm/Demangle/Demangle.h>
#include <llvm/IR/DiagnosticHandler.h>
#include <llvm/IR/LLVMContext.h>
#include <llvm/IR/Metadata.h>
#include <llvm/IR/Module.h>
#include <llvm/Linker/Linker.h>
#include <llvm/Support/FileSystem.h>
#include <llvm/Support/MemoryBuffer.h>
#include <llvm/Support/raw_ostream.h>
#include <llvm/Support/xxhash.h>

#include <algorithm>

#include "probe/drive_constants.h"

namespace dextral::probe {

namespace {

constexpr std::size_t kMostLinked = 200;  // units that one kit takes from

struct Silent : llvm::DiagnosticHandler {
  bool handleDiagnostics(const llvm::DiagnosticInfo&) override { return true; }
};

std::vector<std::pair<std::string, std::string>> missing(const llvm::Module& module) {
  std::vector<std::pair<std::string, std::string>> list;
  const llvm::NamedMDNode* node = module.getNamedMetadata(kMissing);
  for (unsigned i = 0; node && i < node->getNumOperands(); ++i) {
    const llvm::MDNode* both = node->getOperand(i);
    std::string key = llvm::cast<llvm::MDString>(both->getOperand(0))->getString().str();
    std::string symbol = llvm::cast<llvm::MDString>(both->getOperand(1))->getString().str();
    const llvm::Function* function = module.getFunction(symbol);
    if (function && function->isDeclaration()) list.emplace_back(std::move(key), std::move(symbol));
  }
  std::sort(list.begin(), list.end());
  return list;
}

class Shelf {
 public:
  Shelf(const project::Project& project, const Elsewhere& elsewhere, std::shared_ptr<llvm::LLVMContext> context)
      : project_(project), elsewhere_(elsewhere), context_(std::move(context)) {}

  std::unique_ptr<llvm::Module> module_of(const std::string& file) const {
    const auto unit = std::find_if(project_.units.begin(), project_.units.end(), [&](const project::Unit& u) { return u.file == file; });
    const auto keys = elsewhere_.called.find(file);
    if (unit == project_.units.end() || keys == elsewhere_.called.end()) return nullptr;
    const std::string place = place_of(file);
    if (auto kept = read(place)) return kept;
    Kit kit = emit_functions(*unit, project_, keys->second, context_);
    fix_constants(kit);
    if (kit.module) write(place, *kit.module);
    return std::move(kit.module);
  }

 private:
  std::string place_of(const std::string& file) const {
    return elsewhere_.folder.empty() ? "" : elsewhere_.folder + "/" + std::to_string(llvm::xxh3_64bits(llvm::StringRef(file))) + ".bc";
  }

  std::unique_ptr<llvm::Module> read(const std::string& place) const {
    if (place.empty()) return nullptr;
    auto buffer = llvm::MemoryBuffer::getFile(place);
    if (!buffer) return nullptr;
    auto module = llvm::parseBitcodeFile(**buffer, *context_);
    if (module) return std::move(*module);
    llvm::consumeError(module.takeError());
    return nullptr;
  }

  // Under its name only when it is whole, since others may be reading.
  static void write(const std::string& place, const llvm::Module& module) {
    if (place.empty()) return;
    llvm::SmallString<256> part;
    int descriptor = -1;
    if (llvm::sys::fs::createUniqueFile(place + "-%%%%%%%%", descriptor, part)) return;
    {
      llvm::raw_fd_ostream stream(descriptor, true);
      llvm::WriteBitcodeToFile(module, stream);
    }
    if (llvm::sys::fs::rename(part, place)) llvm::sys::fs::remove(part);
  }

  const project::Project& project_;
  const Elsewhere& elsewhere_;
  std::shared_ptr<llvm::LLVMContext> context_;
};

}  // namespace

Elsewhere elsewhere(const std::vector<Facts>& units) {
  Elsewhere found;
  for (const Facts& unit : units)
    for (const Function& function : unit.functions)
      if (function.body) found.unit_of.try_emplace(function.key, unit.unit);
  for (const Facts& unit : units)
    for (const Function& function : unit.functions)
      for (const Call& call : function.calls)
        if (auto at = found.unit_of.find(call.callee); at != found.unit_of.end() && at->second != unit.unit)
          found.called[at->second].insert(call.callee);
  return found;
}

void link(Kit& kit, const project::Project& project, const Elsewhere& elsewhere) {
  if (!kit.module) return;
  kit.context->setDiagnosticHandler(std::make_unique<Silent>());
  const Shelf shelf(project, elsewhere, kit.context);
  std::set<std::string> tried;
  for (bool more = true; more && tried.size() < kMostLinked;) {
    more = false;
    for (const auto& [key, symbol] : missing(*kit.module)) {
      const auto at = elsewhere.unit_of.find(key);
      if (at == elsewhere.unit_of.end() || !tried.insert(key).second) continue;
      std::unique_ptr<llvm::Module> module = shelf.module_of(at->second);
      if (!module || module->getTargetTriple() != kit.module->getTargetTriple()) continue;
      llvm::Linker::linkModules(*kit.module, std::move(module), llvm::Linker::Flags::LinkOnlyNeeded);
      more = true;
      break;
    }
  }
  for (const auto& [key, symbol] : missing(*kit.module)) kit.missing.insert(llvm::demangle(symbol));
}

}  // namespace dextral::probe
