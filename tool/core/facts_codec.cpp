// Facts to bytes and back, for the way between a worker and its parent.
//
// The bytes are a mark, a checksum and one flat CBOR array: the fields of all
// structures in the order of their declaration, a list or an option led by its
// length. One description of each structure serves both ways; it names every
// field, so that a field added in facts.h does not compile until it stands here.
//
// Snapshots are shared between the parts of a function. Each is written where
// it is met first and referred to by number afterwards; numbers are given when
// a snapshot ends, on both sides alike. Limits: the mark holds for one version
// of the program; the bytes are not kept between versions.
#include <concepts>
#include <map>
#include <nlohmann/json.hpp>

#include "core/facts.h"

namespace dextral {

namespace {

using nlohmann::json;
using SharedSnapshot = std::shared_ptr<const Snapshot>;

constexpr char kMark[] = "dextral facts 1\n";
constexpr std::size_t kMarkSize = sizeof kMark - 1;
constexpr std::size_t kChecksumSize = 8;
constexpr std::int64_t kNewSnapshot = -1;
constexpr std::int64_t kNoSnapshot = -2;

// FNV-1a, 64 bits.
std::string checksum(const std::string& bytes, std::size_t from) {
  std::uint64_t hash = 0xcbf29ce484222325u;
  for (std::size_t i = from; i < bytes.size(); ++i) hash = (hash ^ std::uint8_t(bytes[i])) * 0x100000001b3u;
  std::string eight;
  for (std::size_t i = 0; i < kChecksumSize; ++i) eight += char(hash >> (8 * i));
  return eight;
}

template <class T, class U>
concept Is = std::same_as<std::remove_const_t<T>, U>;

template <class Archive>
void fields(Archive& archive, Is<Position> auto& x) {
  auto& [line, column] = x;
  archive(line, column);
}

template <class Archive>
void fields(Archive& archive, Is<Span> auto& x) {
  auto& [file, begin, end] = x;
  archive(file, begin, end);
}

template <class Archive>
void fields(Archive& archive, Is<Frame> auto& x) {
  auto& [name, tag, own, variable, owner] = x;
  archive(name, tag, own, variable, owner);
}

template <class Archive>
void fields(Archive& archive, Is<Quantity> auto& x) {
  auto& [kind, in, first, second, from_point, to_point, sequence, word, second_word, stored, unit, turning, scalar,
         product, maps_by, layout, form, hand, seen_from, row_vectors, small, increment, of] = x;
  archive(kind, in, first, second, from_point, to_point, sequence, word, second_word, stored, unit, turning, scalar,
          product, maps_by, layout, form, hand, seen_from, row_vectors, small, increment, of);
}

template <class Archive>
void fields(Archive& archive, Is<Acceptance> auto& x) {
  auto& [rule, reason] = x;
  archive(rule, reason);
}

template <class Archive>
void fields(Archive& archive, Is<Value> auto& x) {
  auto& [shape, rotation, text, inverse_form, span, of_rotation] = x;
  archive(shape, rotation, text, inverse_form, span, of_rotation);
}

template <class Archive>
void fields(Archive& archive, Is<Operand> auto& x) {
  auto& [value, span, text] = x;
  archive(value, span, text);
}

template <class Archive>
void fields(Archive& archive, Is<Twin> auto& x) {
  auto& [operand, name] = x;
  archive(operand, name);
}

template <class Archive>
void fields(Archive& archive, Is<Operation> auto& x) {
  auto& [kind, result, operands, numbers, item, how, span, text, target, arms, twins, callee] = x;
  archive(kind, result, operands, numbers, item, how, span, text, target, arms, twins, callee);
}

template <class Archive>
void fields(Archive& archive, Is<Hold> auto& x) {
  auto& [quantity, source, said, phrase, subject, contract, call, formal] = x;
  archive(quantity, source, said, phrase, subject, contract, call, formal);
}

template <class Archive>
void fields(Archive& archive, Is<Part> auto& x) {
  auto& [path, is] = x;
  archive(path, is);
}

template <class Archive>
void fields(Archive& archive, Is<Snapshot> auto& x) {
  auto& [path, epoch, parts] = x;
  archive(path, epoch, parts);
}

template <class Archive>
void fields(Archive& archive, Is<Binding> auto& x) {
  auto& [formal, before, after, span, text, object] = x;
  archive(formal, before, after, span, text, object);
}

template <class Archive>
void fields(Archive& archive, Is<Call> auto& x) {
  auto& [callee, name, dispatched, bindings] = x;
  archive(callee, name, dispatched, bindings);
}

template <class Archive>
void fields(Archive& archive, Is<Reading> auto& x) {
  auto& [path, epoch, value] = x;
  archive(path, epoch, value);
}

template <class Archive>
void fields(Archive& archive, Is<Declaration> auto& x) {
  auto& [value, name, span, rotation] = x;
  archive(value, name, span, rotation);
}

template <class Archive>
void fields(Archive& archive, Is<Function> auto& x) {
  auto& [key, name, span, body, template_instance, parameter_names, overrides, values, operations, holds, calls,
         readings, exits, declarations] = x;
  archive(key, name, span, body, template_instance, parameter_names, overrides, values, operations, holds, calls,
          readings, exits, declarations);
}

template <class Archive>
void fields(Archive& archive, Is<Complaint> auto& x) {
  auto& [kind, span, wrong, message, nearest] = x;
  archive(kind, span, wrong, message, nearest);
}

template <class Archive>
void fields(Archive& archive, Is<AcceptanceAt> auto& x) {
  auto& [acceptance, span, from, to] = x;
  archive(acceptance, span, from, to);
}

template <class Archive>
void fields(Archive& archive, Is<FieldFacts> auto& x) {
  auto& [key, name, span, rotation, known] = x;
  archive(key, name, span, rotation, known);
}

template <class Archive>
void fields(Archive& archive, Is<Group> auto& x) {
  auto& [formal, text, count, rows, columns, integer, quaternion, column_major] = x;
  archive(formal, text, count, rows, columns, integer, quaternion, column_major);
}

template <class Archive>
void fields(Archive& archive, Is<Signature> auto& x) {
  auto& [inputs, outputs, single_precision] = x;
  archive(inputs, outputs, single_precision);
}

template <class Archive>
void fields(Archive& archive, Is<Term> auto& x) {
  auto& [formal, output, quantity] = x;
  archive(formal, output, quantity);
}

template <class Archive>
void fields(Archive& archive, Is<Meaning> auto& x) {
  auto& [id, words, formula, contract, equivalents] = x;
  archive(id, words, formula, contract, equivalents);
}

template <class Archive>
void fields(Archive& archive, Is<Selected> auto& x) {
  auto& [formal, value] = x;
  archive(formal, value);
}

template <class Archive>
void fields(Archive& archive, Is<Trial> auto& x) {
  auto& [input, output] = x;
  archive(input, output);
}

template <class Archive>
void fields(Archive& archive, Is<Measurement> auto& x) {
  auto& [key, name, span, signature, selected, meanings, refusal, trials, points, steps, worst] = x;
  archive(key, name, span, signature, selected, meanings, refusal, trials, points, steps, worst);
}

template <class Archive>
void fields(Archive& archive, Is<Facts> auto& x) {
  auto& [unit, read, not_read_because, files, functions, field_facts, complaints, acceptances, measurements] = x;
  archive(unit, read, not_read_because, files, functions, field_facts, complaints, acceptances, measurements);
}

class Writer {
 public:
  template <class... T>
  void operator()(const T&... items) {
    (put(items), ...);
  }
  const json& tokens() const { return tokens_; }

 private:
  void put(const std::string& s) { tokens_.push_back(s); }
  void put(double x) { tokens_.push_back(x); }
  template <class T>
    requires std::is_arithmetic_v<T> || std::is_enum_v<T>
  void put(T x) {
    tokens_.push_back(std::int64_t(x));
  }
  template <class T>
  void put(const std::vector<T>& list) {
    put(list.size());
    for (const T& item : list) put(item);
  }
  template <class T>
  void put(const std::optional<T>& x) {
    put(x.has_value());
    if (x) put(*x);
  }
  template <class A, class B>
  void put(const std::pair<A, B>& x) {
    (*this)(x.first, x.second);
  }
  template <class... T>
  void put(const std::variant<T...>& x) {
    put(x.index());
    std::visit([this](const auto& is) { this->put(is); }, x);
  }
  void put(const std::shared_ptr<const Quantity>& x) {
    put(x != nullptr);
    if (x) put(*x);
  }
  void put(const SharedSnapshot& x) {
    if (!x) return put(kNoSnapshot);
    if (auto known = numbers_.find(x.get()); known != numbers_.end()) return put(known->second);
    put(kNewSnapshot);
    put(*x);
    numbers_.emplace(x.get(), numbers_.size());
  }
  void put(const FileTable& files) { put(files.names()); }
  template <class T>
    requires requires(Writer& w, const T& x) { fields(w, x); }
  void put(const T& x) {
    fields(*this, x);
  }

  json tokens_ = json::array();
  std::map<const Snapshot*, std::size_t> numbers_;
};

// Reads what Writer wrote. After the first thing that does not fit, everything
// reads as empty and complete() is false.
class Reader {
 public:
  explicit Reader(const json& tokens) : tokens_(tokens) {}
  template <class... T>
  void operator()(T&... items) {
    (get(items), ...);
  }
  bool complete() const { return good_ && next_ == tokens_.size(); }

 private:
  const json* token(bool (json::*fits)() const noexcept) {
    good_ = good_ && next_ < tokens_.size() && (tokens_[next_].*fits)();
    return good_ ? &tokens_[next_++] : nullptr;
  }
  std::int64_t number() {
    const json* t = token(&json::is_number_integer);
    return t ? t->get<std::int64_t>() : 0;
  }
  std::size_t length(std::size_t most) {
    std::int64_t n = number();
    good_ = good_ && n >= 0 && std::size_t(n) <= most;
    return good_ ? std::size_t(n) : 0;
  }
  void get(std::string& s) {
    if (const json* t = token(&json::is_string)) s = t->get_ref<const std::string&>();
  }
  void get(double& x) {
    if (const json* t = token(&json::is_number_float)) x = t->get<double>();
  }
  template <class T>
    requires std::is_arithmetic_v<T> || std::is_enum_v<T>
  void get(T& x) {
    x = T(number());
  }
  template <class T>
  void get(std::vector<T>& list) {
    list.resize(length(tokens_.size() - next_));
    for (T& item : list) {
      if (!good_) return;
      get(item);
    }
  }
  template <class T>
  void get(std::optional<T>& x) {
    if (length(1)) get(x.emplace());
  }
  template <class A, class B>
  void get(std::pair<A, B>& x) {
    (*this)(x.first, x.second);
  }
  template <class A, class B>
  void get(std::variant<A, B>& x) {
    if (length(1)) {
      get(x.template emplace<1>());
    } else {
      get(x.template emplace<0>());
    }
  }
  void get(std::shared_ptr<const Quantity>& x) {
    if (!length(1)) return;
    Quantity of;
    get(of);
    x = std::make_shared<const Quantity>(std::move(of));
  }
  void get(SharedSnapshot& x) {
    std::int64_t n = number();
    if (!good_ || n == kNoSnapshot) return;
    if (n == kNewSnapshot) {
      Snapshot fresh;
      get(fresh);
      snapshots_.push_back(std::make_shared<const Snapshot>(std::move(fresh)));
      x = snapshots_.back();
      return;
    }
    good_ = n >= 0 && std::size_t(n) < snapshots_.size();
    if (good_) x = snapshots_[std::size_t(n)];
  }
  void get(FileTable& files) {
    std::vector<std::string> names;
    get(names);
    for (const std::string& name : names) files.add(name);
  }
  template <class T>
    requires requires(Reader& r, T& x) { fields(r, x); }
  void get(T& x) {
    fields(*this, x);
  }

  const json& tokens_;
  std::size_t next_ = 0;
  bool good_ = true;
  std::vector<SharedSnapshot> snapshots_;
};

}  // namespace

std::string encode(const Facts& facts) {
  Writer writer;
  writer(facts);
  std::string tokens;
  json::to_cbor(writer.tokens(), tokens);
  return kMark + checksum(tokens, 0) + tokens;
}

std::optional<Facts> decode(const std::string& bytes) {
  constexpr std::size_t head = kMarkSize + kChecksumSize;
  if (bytes.size() < head || bytes.compare(0, kMarkSize, kMark) != 0) return std::nullopt;
  if (bytes.compare(kMarkSize, kChecksumSize, checksum(bytes, head)) != 0) return std::nullopt;
  const json tokens = json::from_cbor(bytes.begin() + head, bytes.end(), true, false);
  if (!tokens.is_array()) return std::nullopt;
  Reader reader(tokens);
  Facts facts;
  reader(facts);
  if (!reader.complete()) return std::nullopt;
  return facts;
}

}  // namespace dextral
