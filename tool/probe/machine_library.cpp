// Functions of the library that reach memory: allocation, bytes, texts, and the
// maths that gives several numbers; and those that end a run.
#include <algorithm>
#include <cmath>
#include <unordered_map>

#include "probe/machine_maths.h"
#include "probe/machine_run.h"

namespace dextral::probe::machine {

namespace {

using Bits = std::uint64_t;
using Arguments = std::span<const Slot>;

bool allocate(Run& run, Arguments arguments, Slot& result) {
  return run.charge(arguments[0].bits) && run.memory().allocate(arguments[0].bits, result.bits);
}

bool allocate_aligned(Run& run, Arguments arguments, Slot& result) {
  return allocate(run, arguments.subspan(1), result);
}

bool allocate_cleared(Run& run, Arguments arguments, Slot& result) {
  Bits size = 0;
  if (__builtin_mul_overflow(arguments[0].bits, arguments[1].bits, &size)) size = ~0ull;
  return run.charge(size) && run.memory().allocate(size, result.bits) && run.memory().fill(result.bits, {0, 0}, size);
}

bool reallocate(Run& run, Arguments arguments, Slot& result) {
  const Bits old = arguments[0].bits, size = arguments[1].bits;
  if (!run.charge(size) || !run.memory().allocate(size, result.bits)) return false;
  if (old == 0) return true;
  Bits before = 0;
  return run.memory().size_of(old, before) && run.memory().copy(result.bits, old, std::min(before, size)) &&
         run.memory().release(old);
}

bool release(Run& run, Arguments arguments, Slot&) { return run.memory().release(arguments[0].bits); }

bool allocate_into(Run& run, Arguments arguments, Slot& result) {
  Slot made;
  if (!run.charge(arguments[2].bits) || !run.memory().allocate(arguments[2].bits, made.bits)) return false;
  result.bits = 0;
  return run.memory().store(arguments[0].bits, {Kind::pointer, 64, 8, 0}, made);
}

bool copy(Run& run, Arguments arguments, Slot& result) {
  result = arguments[0];
  return run.charge(arguments[2].bits) && run.memory().copy(arguments[0].bits, arguments[1].bits, arguments[2].bits);
}

bool fill(Run& run, Arguments arguments, Slot& result) {
  result = arguments[0];
  return run.charge(arguments[2].bits) && run.memory().fill(arguments[0].bits, arguments[1], arguments[2].bits);
}

bool defined(Run& run, const Place& place, Bits size) {
  return std::all_of(place.undefined, place.undefined + size, [](std::uint8_t bits) { return bits == 0; }) ||
         run.raise(sentence(Cause::unset));
}

int sign(int value) { return (value > 0) - (value < 0); }

bool compare(Run& run, Arguments arguments, Slot& result) {
  const Bits size = arguments[2].bits;
  Place left, right;
  result.bits = 0;
  if (size == 0) return true;
  if (!run.charge(size) || !run.memory().readable(arguments[0].bits, size, left) ||
      !run.memory().readable(arguments[1].bits, size, right) || !defined(run, left, size) || !defined(run, right, size))
    return false;
  result = slot_of(sign(std::memcmp(left.bytes, right.bytes, size)));
  return true;
}

bool text_of(Run& run, const Slot& address, std::string& text) {
  return run.memory().text(address.bits, text) && run.charge(64 * text.size());
}

bool text_length(Run& run, Arguments arguments, Slot& result) {
  std::string text;
  if (!text_of(run, arguments[0], text)) return false;
  result.bits = text.size();
  return true;
}

bool compare_texts(Run& run, Arguments arguments, Slot& result) {
  std::string left, right;
  if (!text_of(run, arguments[0], left) || !text_of(run, arguments[1], right)) return false;
  if (arguments.size() == 3) {
    left.resize(std::min<Bits>(left.size(), arguments[2].bits));
    right.resize(std::min<Bits>(right.size(), arguments[2].bits));
  }
  result = slot_of(sign(left.compare(right)));
  return true;
}

bool copy_text(Run& run, Arguments arguments, Slot& result) {
  std::string text;
  result = arguments[0];
  return text_of(run, arguments[1], text) && run.memory().copy(arguments[0].bits, arguments[1].bits, text.size() + 1);
}

template <typename T>
bool give(Run& run, const Slot& address, T value) {
  constexpr std::uint8_t bytes = sizeof(T);
  return run.memory().store(address.bits, {Kind::integer, 8 * bytes, bytes, 0}, slot_of(value));
}

template <typename T>
bool sine_and_cosine(Run& run, Arguments arguments, Slot&) {
  const T angle = number_of_bits<T>(arguments[0].bits);
  return give(run, arguments[1], static_cast<T>(std::sin(angle))) &&
         give(run, arguments[2], static_cast<T>(std::cos(angle)));
}

template <typename T>
bool whole_and_rest(Run& run, Arguments arguments, Slot& result) {
  T whole = 0;
  result = slot_of(std::modf(number_of_bits<T>(arguments[0].bits), &whole));
  return give(run, arguments[1], whole);
}

template <typename T>
bool fraction_and_exponent(Run& run, Arguments arguments, Slot& result) {
  int exponent = 0;
  result = slot_of(std::frexp(number_of_bits<T>(arguments[0].bits), &exponent));
  return give(run, arguments[1], exponent);
}

template <typename T>
bool rest_and_quotient(Run& run, Arguments arguments, Slot& result) {
  int quotient = 0;
  result = slot_of(std::remquo(number_of_bits<T>(arguments[0].bits), number_of_bits<T>(arguments[1].bits), &quotient));
  return give(run, arguments[2], quotient);
}

template <typename T>
bool not_a_number(Run&, Arguments, Slot& result) {
  result = slot_of(std::numeric_limits<T>::quiet_NaN());
  return true;
}

bool error_cell(Run& run, Arguments, Slot& result) { return run.error_cell(result.bits); }

constexpr Part one_byte{Kind::integer, 8, 1, 0};

bool guard_acquire(Run& run, Arguments arguments, Slot& result) {
  Slot done;
  if (!run.memory().load(arguments[0].bits, one_byte, done)) return false;
  if (done.undefined != 0) return run.raise(sentence(cause_of(done)));
  result.bits = done.bits == 0;
  if (done.bits == 0) run.memory().enter_guard();
  return true;
}

bool guard_release(Run& run, Arguments arguments, Slot&) {
  run.memory().leave_guard();
  return run.memory().store(arguments[0].bits, one_byte, {1, 0});
}

bool guard_abort(Run& run, Arguments, Slot&) {
  run.memory().leave_guard();
  return true;
}

bool nothing(Run&, Arguments, Slot& result) {
  result = {0, 0};
  return true;
}

class Table {
 public:
  Table() {
    allocation();
    bytes();
    several_numbers();
    start_up();
    endings();
  }

  const Stand* find(const std::string& symbol) const {
    auto at = stands_.find(symbol);
    if (at != stands_.end()) return &at->second;
    return symbol.starts_with("_ZSt") && symbol.find("__throw_") != std::string::npos ? &throws_ : nullptr;
  }

 private:
  void add(const char* name, const char* signature, Effect effect) {
    stands_[name] = {nullptr, effect, signature, nullptr};
  }
  void end(const char* name, const char* reason) { stands_[name] = {nullptr, nullptr, nullptr, reason}; }

  void allocation() {
    add("malloc", "p(l)", allocate);
    add("calloc", "p(ll)", allocate_cleared);
    add("realloc", "p(pl)", reallocate);
    add("aligned_alloc", "p(ll)", allocate_aligned);
    add("posix_memalign", "i(pll)", allocate_into);
    for (const char* name : {"_Znwm", "_Znam"}) add(name, "p(l)", allocate);
    for (const char* name : {"_ZnwmSt11align_val_t", "_ZnamSt11align_val_t"}) add(name, "p(ll)", allocate);
    for (const char* name : {"_ZnwmRKSt9nothrow_t", "_ZnamRKSt9nothrow_t"}) add(name, "p(lp)", allocate);
    for (const char* name : {"free", "_ZdlPv", "_ZdaPv"}) add(name, "v(p)", release);
    for (const char* name : {"_ZdlPvm", "_ZdaPvm", "_ZdlPvSt11align_val_t", "_ZdaPvSt11align_val_t"})
      add(name, "v(pl)", release);
    for (const char* name : {"_ZdlPvmSt11align_val_t", "_ZdaPvmSt11align_val_t"}) add(name, "v(pll)", release);
    for (const char* name : {"_ZdlPvRKSt9nothrow_t", "_ZdaPvRKSt9nothrow_t"}) add(name, "v(pp)", release);
  }

  void bytes() {
    add("memcpy", "p(ppl)", copy);
    add("memmove", "p(ppl)", copy);
    add("__memcpy_chk", "p(ppll)", copy);
    add("__memmove_chk", "p(ppll)", copy);
    add("memset", "p(pil)", fill);
    add("__memset_chk", "p(pill)", fill);
    add("memcmp", "i(ppl)", compare);
    add("bcmp", "i(ppl)", compare);
    add("strlen", "l(p)", text_length);
    add("strcmp", "i(pp)", compare_texts);
    add("strncmp", "i(ppl)", compare_texts);
    add("strcpy", "p(pp)", copy_text);
  }

  void several_numbers() {
    for (const char* name : {"sincos", "__sincos"}) add(name, "v(dpp)", sine_and_cosine<double>);
    for (const char* name : {"sincosf", "__sincosf"}) add(name, "v(fpp)", sine_and_cosine<float>);
    add("modf", "d(dp)", whole_and_rest<double>);
    add("modff", "f(fp)", whole_and_rest<float>);
    add("frexp", "d(dp)", fraction_and_exponent<double>);
    add("frexpf", "f(fp)", fraction_and_exponent<float>);
    add("remquo", "d(ddp)", rest_and_quotient<double>);
    add("remquof", "f(ffp)", rest_and_quotient<float>);
    add("nan", "d(p)", not_a_number<double>);
    add("nanf", "f(p)", not_a_number<float>);
    add("__errno_location", "p()", error_cell);
  }

  void start_up() {
    add("__cxa_guard_acquire", "i(p)", guard_acquire);
    add("__cxa_guard_release", "v(p)", guard_release);
    add("__cxa_guard_abort", "v(p)", guard_abort);
    add("__cxa_atexit", "i(ppp)", nothing);
    add("atexit", "i(p)", nothing);
  }

  void endings() {
    for (const char* name : {"__cxa_throw", "__cxa_rethrow", "__cxa_allocate_exception", "__cxa_bad_cast",
                             "__cxa_bad_typeid", "__cxa_throw_bad_array_new_length", "_Unwind_Resume"})
      end(name, "throws");
    for (const char* name :
         {"__assert_fail", "__assert", "__assert_perror_fail", "abort", "_ZSt9terminatev", "__cxa_pure_virtual",
          "__clang_call_terminate", "__stack_chk_fail", "_ZSt21__glibcxx_assert_failPKciS0_S0_"})
      end(name, "asserts");
    for (const char* name : {"exit", "_exit", "_Exit", "quick_exit"}) end(name, "ends the program");
  }

  std::unordered_map<std::string, Stand> stands_;
  Stand throws_{nullptr, nullptr, nullptr, "throws"};
};

}  // namespace

const Stand* library(const std::string& symbol) {
  static const Table table;
  return table.find(symbol);
}

}  // namespace dextral::probe::machine
