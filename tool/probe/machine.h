// An evaluator of LLVM IR that can reach nothing but its own memory.
//
// Nothing of the analysed project runs natively. The machine knows integers,
// float and double with their own rounding, pointers into a bounded memory,
// aggregates, small vectors, calls, the memory intrinsics, the functions of
// <math.h>, and small allocations. Every load, store, step, byte and call is
// bounded and checked; what it does not know ends the run with its name.
#pragma once

#include <cstddef>
#include <cstdint>
#include <map>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <variant>
#include <vector>

#include "probe/recognise.h"

namespace llvm {
class Function;
class Module;
}  // namespace llvm

namespace dextral::probe {

struct Bounds {
  std::size_t steps = 2'000'000;
  std::size_t bytes = 16 << 20;
  std::size_t depth = 200;
};

using Address = std::uint64_t;

// A number, a pointer, or the bytes of an aggregate, as the IR takes or gives it.
using Word = std::variant<std::uint64_t, float, double, std::vector<std::byte>>;

class Machine {
 public:
  // Globals of the module are laid out and initialised; those without a known
  // initialiser hold no value, and reading one ends the run.
  Machine(const llvm::Module&, Bounds);
  ~Machine();

  // A fresh object. Its bytes are undefined until written.
  std::variant<Address, Refusal> allocate(std::size_t bytes);
  std::optional<Refusal> write(Address, std::span<const std::byte>);
  // Refuses where a byte is undefined.
  std::variant<std::vector<std::byte>, Refusal> read(Address, std::size_t bytes) const;

  // What the last call has done to an object, byte by byte; empty for what the
  // caller did not allocate and is no global.
  struct Traffic {
    std::vector<bool> read;  // before it was written
    std::vector<bool> written;
  };
  Traffic traffic(Address object) const;

  // Globals that the last call read while their value was not constant, by
  // symbol, and where they lie: further inputs. One without a known value can
  // be written, and the call made again.
  std::map<std::string, Address> globals_read() const;

  // One call, with the memory as it stands. The bounds count from here.
  std::variant<Word, Refusal> call(const llvm::Function&, const std::vector<Word>& arguments);
  std::size_t steps() const;  // of the last call

 private:
  struct State;
  std::unique_ptr<State> state_;
};

}  // namespace dextral::probe
