// The machine as its callers see it: words in, words out.
#include "probe/machine.h"

#include <llvm/IR/DataLayout.h>
#include <llvm/IR/Function.h>
#include <llvm/IR/Module.h>

#include "probe/machine_run.h"

namespace dextral::probe {

using machine::Kind;
using machine::Part;
using machine::Shape;
using machine::Slot;

struct Machine::State {
  State(const llvm::Module& module, Bounds bounds) : module(module), run(module, bounds) {}

  const llvm::Module& module;
  machine::Run run;
};

namespace {

bool flatten_bytes(const std::vector<std::byte>& bytes, const Shape& shape, std::vector<Slot>& slots) {
  if (bytes.size() != shape.bytes || shape.unstorable) return false;
  const std::vector<std::uint8_t> undefined(bytes.size() + 8);
  for (const Part& part : shape.parts)
    slots.push_back(machine::get(part, reinterpret_cast<const std::uint8_t*>(bytes.data()) + part.offset,
                                 undefined.data() + part.offset));
  return true;
}

bool flatten(const Word& word, const Shape& shape, bool is_whole, std::vector<Slot>& slots) {
  if (auto* bytes = std::get_if<std::vector<std::byte>>(&word)) return is_whole && flatten_bytes(*bytes, shape, slots);
  if (is_whole || shape.parts.size() != 1) return false;
  const Part& part = shape.parts.front();
  if (auto* number = std::get_if<double>(&word)) {
    slots.push_back({machine::bits_of(*number), 0});
    return part.kind == Kind::double_float;
  }
  if (auto* number = std::get_if<float>(&word)) {
    slots.push_back({machine::bits_of(*number), 0});
    return part.kind == Kind::single_float;
  }
  slots.push_back({std::get<std::uint64_t>(word) & machine::ones(part.width), 0});
  return part.kind == Kind::integer || part.kind == Kind::pointer;
}

Word word_of(const Shape& shape, bool is_whole, const std::vector<Slot>& slots) {
  if (is_whole) {
    std::vector<std::byte> bytes(shape.bytes);
    for (std::size_t i = 0; i < slots.size(); ++i)
      std::memcpy(bytes.data() + shape.parts[i].offset, &slots[i].bits, shape.parts[i].bytes);
    return bytes;
  }
  if (slots.empty()) return std::uint64_t{0};
  if (shape.parts.front().kind == Kind::double_float) return machine::as_double(slots.front().bits);
  if (shape.parts.front().kind == Kind::single_float) return machine::as_float(slots.front().bits);
  return slots.front().bits;
}

bool is_whole(const llvm::Type& type) { return type.isAggregateType() || type.isVectorTy(); }

std::string unfit(const llvm::Module& module, const llvm::Function& function) {
  const llvm::DataLayout& layout = module.getDataLayout();
  if (layout.isBigEndian() || layout.getPointerSizeInBits(0) != 64) return "is for a processor of another kind";
  if (function.isDeclaration()) return "calls " + machine::name_for_people(function);
  if (function.isVarArg()) return "takes a variable number of arguments";
  return "";
}

}  // namespace

Machine::Machine(const llvm::Module& module, Bounds bounds) : state_(std::make_unique<State>(module, bounds)) {}
Machine::~Machine() = default;

std::variant<Address, Refusal> Machine::allocate(std::size_t bytes) {
  state_->run.world().fault.clear();
  state_->run.memory().recount();
  Address at = 0;
  if (!state_->run.memory().allocate(bytes, at, machine::Origin::given))
    return Refusal{state_->run.world().fault.why()};
  return at;
}

std::optional<Refusal> Machine::write(Address at, std::span<const std::byte> bytes) {
  state_->run.world().fault.clear();
  if (state_->run.memory().write_from_outside(at, bytes)) return std::nullopt;
  return Refusal{state_->run.world().fault.why()};
}

std::variant<std::vector<std::byte>, Refusal> Machine::read(Address at, std::size_t size) const {
  machine::Fault fault;
  std::vector<std::byte> bytes;
  if (!state_->run.memory().read_from_outside(at, size, bytes, fault)) return Refusal{fault.why()};
  return bytes;
}

Machine::Traffic Machine::traffic(Address object) const { return state_->run.memory().traffic(object); }

std::map<std::string, Address> Machine::globals_read() const { return state_->run.memory().globals_read(); }

std::size_t Machine::steps() const { return state_->run.steps(); }

std::variant<Word, Refusal> Machine::call(const llvm::Function& function, const std::vector<Word>& arguments) {
  machine::Run& run = state_->run;
  if (std::string why = unfit(state_->module, function); !why.empty()) return Refusal{why};
  if (arguments.size() != function.arg_size()) return Refusal{"is called with other arguments than it takes"};
  std::vector<Slot> slots, results;
  for (std::size_t i = 0; i < arguments.size(); ++i) {
    llvm::Type& type = *function.getArg(static_cast<unsigned>(i))->getType();
    const Shape& shape = run.world().shapes.of(&type);
    if (!shape.trouble.empty()) return Refusal{shape.trouble};
    if (!flatten(arguments[i], shape, is_whole(type), slots))
      return Refusal{"is called with other arguments than it takes"};
  }
  llvm::Type& type = *function.getReturnType();
  const Shape& shape = run.world().shapes.of(&type);
  if (!shape.trouble.empty()) return Refusal{shape.trouble};
  if (shape.unstorable) return Refusal{"returns a vector of bits"};
  if (!run.call(function, std::move(slots), results)) return Refusal{run.world().fault.why()};
  for (const Slot& slot : results)
    if (slot.undefined != 0) return Refusal{machine::sentence(machine::cause_of(slot))};
  return word_of(shape, is_whole(type), results);
}

}  // namespace dextral::probe
