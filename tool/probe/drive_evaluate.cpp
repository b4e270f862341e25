#include "probe/drive_evaluate.h"

#include <llvm/IR/Function.h>
#include <llvm/IR/Module.h>

#include <cstring>

#include "probe/drive_globals.h"

namespace dextral::probe {

namespace {

using Bytes = std::vector<std::byte>;

constexpr std::size_t kRunsOfMachine = 256;  // objects of past runs stay in its memory

Bytes bytes_of(const Leaf& leaf, double value) {
  Bytes bytes(leaf.bytes);
  if (leaf.number == Number::double_float) {
    std::memcpy(bytes.data(), &value, sizeof value);
  } else if (leaf.number == Number::single_float) {
    const float narrow = static_cast<float>(value);
    std::memcpy(bytes.data(), &narrow, sizeof narrow);
  } else {
    const long long whole = static_cast<long long>(value);
    std::memcpy(bytes.data(), &whole, std::min(bytes.size(), sizeof whole));
  }
  return bytes;
}

double value_of(const Leaf& leaf, const std::byte* bytes) {
  if (leaf.number == Number::double_float) {
    double value = 0;
    std::memcpy(&value, bytes, sizeof value);
    return value;
  }
  if (leaf.number == Number::single_float) {
    float value = 0;
    std::memcpy(&value, bytes, sizeof value);
    return value;
  }
  unsigned long long whole = 0;
  std::memcpy(&whole, bytes, std::min(leaf.bytes, sizeof whole));
  return static_cast<double>(whole);
}

template <class Visit>
void each_leaf(const Object& object, const Visit& visit) {
  std::size_t index = 0;
  for (const Bundle& bundle : object.bundles)
    for (const Leaf& leaf : bundle.leaves) visit(index++, leaf);
}

Word word_of(const Piece& piece, const Bytes& bytes) {
  const std::byte* at = bytes.data() + piece.offset;
  switch (piece.kind) {
    case Piece::Kind::single_float: {
      float value = 0;
      std::memcpy(&value, at, sizeof value);
      return value;
    }
    case Piece::Kind::double_float: {
      double value = 0;
      std::memcpy(&value, at, sizeof value);
      return value;
    }
    case Piece::Kind::integer: {
      std::uint64_t value = 0;
      std::memcpy(&value, at, std::min(piece.bytes, sizeof value));
      return value;
    }
    case Piece::Kind::bytes: break;
  }
  return Bytes(at, at + piece.bytes);
}

void put(const Word& word, const Piece& piece, Bytes& bytes) {
  if (bytes.size() < piece.offset + piece.bytes) bytes.resize(piece.offset + piece.bytes);
  std::byte* at = bytes.data() + piece.offset;
  if (const auto* whole = std::get_if<Bytes>(&word)) std::memcpy(at, whole->data(), std::min(whole->size(), piece.bytes));
  if (const auto* value = std::get_if<double>(&word)) std::memcpy(at, value, std::min(piece.bytes, sizeof *value));
  if (const auto* value = std::get_if<float>(&word)) std::memcpy(at, value, std::min(piece.bytes, sizeof *value));
  if (const auto* value = std::get_if<std::uint64_t>(&word)) std::memcpy(at, value, std::min(piece.bytes, sizeof *value));
}

class Evaluation {
 public:
  Evaluation(const Kit& kit, const Candidate& candidate, const Setting& setting, Machine& machine)
      : kit_(kit), candidate_(candidate), setting_(setting), machine_(machine) {
    outcome_.after = empty_setting(candidate);
    for (const Values& values : outcome_.after) {
      outcome_.read.emplace_back(values.size());
      outcome_.written.emplace_back(values.size());
    }
    places_.resize(formal_count(candidate));
  }

  Outcome run() {
    if (lay_out() && call()) collect();
    return std::move(outcome_);
  }

 private:
  bool refuse(const std::string& why) {
    outcome_.refusal = why;
    return false;
  }

  bool in_memory(const Formal& formal) const { return formal.behind_pointer || formal.passing.kind == Passing::Kind::address; }

  bool lay_out() {
    for (std::size_t i = 0; i < places_.size(); ++i) {
      const Formal& formal = formal_at(candidate_, i);
      const bool is_result = i >= candidate_.formals.size();
      if (!in_memory(formal) || (is_result && formal.behind_pointer)) continue;
      auto place = formal.fixed_at ? formal.fixed_at : machine_.allocate(std::max<std::size_t>(formal.object.bytes, 1));
      if (auto* refusal = std::get_if<Refusal>(&place)) return refuse(refusal->why);
      places_[i] = std::get<Address>(place);
      if (!write(formal.object, places_[i], setting_[i])) return false;
    }
    return true;
  }

  bool write(const Object& object, Address place, const Values& values) {
    bool well = true;
    each_leaf(object, [&](std::size_t index, const Leaf& leaf) {
      if (!well || index >= values.size() || !values[index]) return;
      if (auto refusal = machine_.write(place + leaf.offset, bytes_of(leaf, *values[index]))) well = refuse(refusal->why);
    });
    return well;
  }

  std::vector<Word> arguments() const {
    std::vector<Word> words;
    const bool returned_by_address = candidate_.result && candidate_.result->passing.kind == Passing::Kind::address;
    if (returned_by_address && !candidate_.result_after_this) words.emplace_back(std::uint64_t{places_.back()});
    for (std::size_t i = 0; i < candidate_.formals.size(); ++i) {
      const Formal& formal = candidate_.formals[i];
      if (formal.passing.kind == Passing::Kind::nothing) continue;
      if (in_memory(formal)) words.emplace_back(std::uint64_t{places_[i]});
      else pass(formal, setting_[i], words);
      if (i == 0 && returned_by_address && candidate_.result_after_this) words.emplace_back(std::uint64_t{places_.back()});
    }
    return words;
  }

  static void pass(const Formal& formal, const Values& values, std::vector<Word>& words) {
    std::size_t size = formal.object.bytes;
    for (const Piece& piece : formal.passing.pieces) size = std::max(size, piece.offset + piece.bytes);
    Bytes bytes(size);
    each_leaf(formal.object, [&](std::size_t index, const Leaf& leaf) {
      const Bytes one = bytes_of(leaf, index < values.size() ? values[index].value_or(0) : 0);
      std::copy(one.begin(), one.end(), bytes.begin() + std::ptrdiff_t(leaf.offset));
    });
    for (const Piece& piece : formal.passing.pieces) words.push_back(word_of(piece, bytes));
  }

  bool call() {
    const llvm::Function* function = kit_.module->getFunction(candidate_.symbol);
    if (!function) return refuse("has no code");
    auto answer = machine_.call(*function, arguments());
    outcome_.steps = machine_.steps();
    for (const auto& [name, place] : machine_.globals_read())
      outcome_.globals.push_back(name);
    if (auto* refusal = std::get_if<Refusal>(&answer)) return refuse(refusal->why);
    return !candidate_.result || take_result(std::get<Word>(answer));
  }

  bool take_result(const Word& word) {
    const Formal& result = *candidate_.result;
    outcome_.written.back().assign(outcome_.written.back().size(), true);
    if (result.passing.kind != Passing::Kind::pieces) return true;
    if (!result.behind_pointer) {
      Bytes bytes(result.object.bytes);
      for (const Piece& piece : result.passing.pieces) put(word, piece, bytes);
      each_leaf(result.object, [&](std::size_t index, const Leaf& leaf) {
        if (leaf.offset + leaf.bytes <= bytes.size()) outcome_.after.back()[index] = value_of(leaf, bytes.data() + leaf.offset);
      });
      return true;
    }
    const auto* address = std::get_if<std::uint64_t>(&word);
    if (!address || *address == 0) return refuse("returns a null pointer");
    for (std::size_t i = 0; i < candidate_.formals.size(); ++i) {
      const Object& object = candidate_.formals[i].object;
      if (places_[i] == 0 || *address < places_[i] || *address >= places_[i] + object.bytes) continue;
      outcome_.returns_argument |= *address == places_[i] && (result.object.open || result.object.bytes == object.bytes);
      shown_ = {i, *address - places_[i]};
    }
    if (result.object.open && !outcome_.returns_argument) return refuse("returns a pointer to numbers, who knows how many");
    places_.back() = *address;
    return true;
  }

  void collect() {
    for (std::size_t i = 0; i < places_.size(); ++i) {
      if (places_[i] == 0) continue;
      const Object& object = formal_at(candidate_, i).object;
      const bool is_result = i >= candidate_.formals.size();
      const Machine::Traffic traffic = is_result ? Machine::Traffic{} : machine_.traffic(places_[i]);
      each_leaf(object, [&](std::size_t index, const Leaf& leaf) {
        auto bytes = machine_.read(places_[i] + leaf.offset, leaf.bytes);
        if (auto* here = std::get_if<Bytes>(&bytes)) outcome_.after[i][index] = value_of(leaf, here->data());
        for (std::size_t b = leaf.offset; b < leaf.offset + leaf.bytes; ++b) {
          if (b < traffic.read.size() && traffic.read[b]) outcome_.read[i][index] = true;
          if (b < traffic.written.size() && traffic.written[b]) outcome_.written[i][index] = true;
        }
        if (is_shown(i, leaf)) outcome_.read[i][index] = true;
      });
    }
  }

  // A reference into an argument gives what stands there.
  bool is_shown(std::size_t formal, const Leaf& leaf) const {
    return shown_ && !outcome_.returns_argument && shown_->first == formal && leaf.offset >= shown_->second &&
           leaf.offset < shown_->second + candidate_.result->object.bytes;
  }

  const Kit& kit_;
  const Candidate& candidate_;
  const Setting& setting_;
  std::optional<std::pair<std::size_t, std::size_t>> shown_;  // formal, offset
  Machine& machine_;
  Outcome outcome_;
  std::vector<Address> places_;  // 0: not in memory
};

}  // namespace

std::size_t formal_count(const Candidate& candidate) { return candidate.formals.size() + (candidate.result ? 1 : 0); }

const Formal& formal_at(const Candidate& candidate, std::size_t index) {
  return index < candidate.formals.size() ? candidate.formals[index] : *candidate.result;
}

Setting empty_setting(const Candidate& candidate) {
  Setting setting;
  for (std::size_t i = 0; i < formal_count(candidate); ++i) {
    std::size_t count = 0;
    for (const Bundle& bundle : formal_at(candidate, i).object.bundles) count += bundle.leaves.size();
    setting.emplace_back(count);
  }
  return setting;
}

Outcome Stage::run(const Setting& setting) {
  if (!machine_ || ++runs_ % kRunsOfMachine == 0) {
    machine_ = std::make_unique<Machine>(*kit_.module, Bounds{});
    if (!make_globals(*machine_, candidate_)) {
      Outcome outcome;
      outcome.refusal = "its globals cannot be laid out";
      machine_.reset();
      return outcome;
    }
  }
  return Evaluation(kit_, candidate_, setting, *machine_).run();
}

}  // namespace dextral::probe
