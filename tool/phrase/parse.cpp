// A recursive descent over words: first the kind by its leading word, then the
// qualifiers behind commas. The first word that does not fit is the error.
#include <algorithm>
#include <cctype>
#include <set>

#include "phrase/phrase.h"
#include "phrase/words.h"

namespace dextral::phrase {

namespace {

const std::vector<std::string> kKinds = {
    "in", "from", "passive", "active", "turn", "angles", "angle", "rate", "velocity", "acceleration", "specific",
    "torque", "along", "geodetic", "tensor", "covariance", "linear", "skew", "none", "accept", "deg", "rad", "pose"};
const std::vector<std::string> kQualifiers = {
    "deg", "rad", "moving", "fixed", "intrinsic", "extrinsic", "body-fixed", "space-fixed", "stored", "scalar", "hamilton",
    "shuster", "jpl", "maps", "seen", "row", "row-major", "column-major", "left-handed", "right-handed", "as", "small", "increment"};
const std::set<std::string> kNoFrames = {"in", "to", "from", "of", "against", "relative", "about", "toward", "because", "frame"};
const std::set<std::string> kSequences = {"321", "312", "231", "213", "132", "123", "313", "323", "121", "131", "212", "232"};

bool identifier(const std::string& word) {
  if (word.empty() || std::isdigit(static_cast<unsigned char>(word[0]))) return false;
  return std::all_of(word.begin(), word.end(), [](unsigned char c) { return std::isalnum(c) || c == '_'; });
}


class Parser {
 public:
  Parser(std::vector<Word> words, std::size_t end, const std::vector<std::string>& rules)
      : words_(std::move(words)), end_(end), rules_(rules) {}

  std::variant<Quantity, Acceptance, Error> run() {
    if (words_.empty()) return Error{end_, 0, "", "a phrase is missing", ""};
    if (words_[0].text == "accept") return accept();
    Quantity q;
    if (!quantity(q)) return error_;
    while (at_ < words_.size()) {
      if (words_[at_].text != ",") {
        fail("a comma or the end of the phrase was expected", {"," });
        return error_;
      }
      ++at_;
      if (!qualifier(q)) return error_;
    }
    if (!complete(q)) return error_;
    return q;
  }

 private:
  const std::string& peek() const {
    static const std::string none;
    return at_ < words_.size() ? words_[at_].text : none;
  }

  bool fail(const std::string& message, const std::vector<std::string>& right) {
    const Word word = at_ < words_.size() ? words_[at_] : Word{"", end_};
    error_ = {word.offset, word.text.size(), word.text,
              word.text.empty() ? "the phrase ends too early: " + message : message,
              word.text.empty() ? "" : nearest_word(word.text, right).value_or("")};
    return false;
  }

  bool expect(const std::string& word) {
    if (peek() != word) return fail("`" + word + "` was expected", {word});
    ++at_;
    return true;
  }

  bool frame(Frame& frame) {
    std::string word = peek();
    if (word == "own") {
      frame.own = true;
      ++at_;
      word = peek();
    }
    if (!word.empty() && word[0] == '?') {
      frame.variable = true;
      word = word.substr(1);
    }
    std::size_t tag = word.find('@');
    if (tag != std::string::npos) {
      frame.tag = word.substr(tag + 1);
      word = word.substr(0, tag);
      if (frame.tag.empty() || !std::all_of(frame.tag.begin(), frame.tag.end(), [](unsigned char c) { return std::isalnum(c) || c == '_'; }))
        return fail("a tag such as `k` or `prev` was expected behind @", {});
    }
    if (!identifier(word) || kNoFrames.contains(word)) return fail("the name of a frame was expected", {"in", "to"});
    frame.name = word;
    ++at_;
    return true;
  }

  bool point(std::string& point) {
    if (!identifier(peek()) || kNoFrames.contains(peek())) return fail("the name of a point was expected", {});
    point = words_[at_++].text;
    return true;
  }

  bool from_to(Quantity& q) { return frame(q.first) && expect("to") && frame(q.second); }

  bool against() {
    if (peek() == "relative") {
      ++at_;
      return expect("to");
    }
    return expect("against");
  }

  bool sequence(Quantity& q) {
    std::string word = peek(), digits;
    for (char c : word) {
      char lower = char(std::tolower(static_cast<unsigned char>(c)));
      if (c == '-') continue;
      if (lower >= 'x' && lower <= 'z') {
        digits += char('1' + (lower - 'x'));
        letters_ = at_;
      } else if (c >= '1' && c <= '3') {
        digits += c;
      } else {
        digits += '?';
      }
    }
    bool partial = (digits.size() == 1 || digits.size() == 2) && digits.find('?') == std::string::npos && (digits.size() == 1 || digits[0] != digits[1]);
    if (!partial && !kSequences.contains(digits)) return fail("a sequence such as 3-2-1 was expected", {"3-2-1", "3-1-3", "1-2-3", "3-1-2", "2-1-3", "2-3-1", "1-3-2"});
    q.sequence = digits;
    ++at_;
    return true;
  }

  bool axis(std::string& word) {
    if (!direction(peek())) {
      std::vector<std::string> all;
      for (int i = 0; i < 18; ++i) all.push_back(text(Direction(i)));
      return fail("a direction such as up, north or forward was expected", all);
    }
    word = words_[at_++].text;
    return true;
  }

  bool optional_in(Quantity& q) { return expect("in") && frame(q.in); }

  bool angle(Quantity& q) {
    if (peek() == "rates") {
      ++at_;
      q.kind = Kind::angle_rates;
      return sequence(q) && from_to(q);
    }
    q.kind = Kind::heading;
    return expect("from") && axis(q.word) && expect("toward") && axis(q.second_word);
  }

  bool vector(Quantity& q) {
    if (peek() == "frame" && at_ + 1 < words_.size() && words_[at_ + 1].text == "named") {
      at_ += 2;
      q.kind = Kind::chosen;
      if (!expect("by")) return false;
      if (peek().empty()) return fail("the name of a field was expected", {});
      q.word = words_[at_++].text;
      return true;
    }
    q.kind = Kind::vector;
    return frame(q.in);
  }

  bool active(Quantity& q) {
    q.kind = Kind::active;
    if (peek() != "in") return from_to(q);
    ++at_;
    if (!frame(q.first)) return false;
    q.second = q.first;
    return true;
  }

  bool about(Quantity& q) {
    if (peek() != "about") return true;
    ++at_;
    return point(q.to_point);
  }

  bool pose_of(Quantity& q) {
    q.kind = Kind::passive;
    return expect("of") && frame(q.first) && expect("in") && frame(q.second);
  }

  bool covariance(Quantity& q) {
    q.kind = Kind::covariance;
    if (!expect("of")) return false;
    Quantity inner;
    if (!quantity(inner)) return false;
    q.of = std::make_shared<const Quantity>(std::move(inner));
    return true;
  }

  bool quantity(Quantity& q) {
    std::string word = peek();
    std::size_t start = at_++;
    if (word == "in") return vector(q);
    if (word == "from") {
      q.kind = Kind::position;
      return point(q.from_point) && expect("to") && point(q.to_point) && expect("in") && frame(q.in);
    }
    if (word == "passive") return q.kind = Kind::passive, from_to(q);
    if (word == "active") return active(q);
    if (word == "pose") return pose_of(q);
    if (word == "turn") return q.kind = Kind::turn, from_to(q);
    if (word == "linear") return q.kind = Kind::linear, from_to(q);
    if (word == "angles") return q.kind = Kind::angles, sequence(q) && from_to(q);
    if (word == "angle") return angle(q);
    if (word == "rate") return q.kind = Kind::rate, expect("of") && frame(q.second) && against() && frame(q.first) && optional_in(q);
    if (word == "velocity" || word == "acceleration") {
      q.kind = word == "velocity" ? Kind::velocity : Kind::acceleration;
      return expect("of") && point(q.to_point) && against() && frame(q.first) && optional_in(q);
    }
    if (word == "specific") return q.kind = Kind::specific_force, expect("force") && optional_in(q);
    if (word == "torque") return q.kind = Kind::torque, expect("about") && point(q.to_point) && optional_in(q);
    if (word == "along") return q.kind = Kind::along, axis(q.word);
    if (word == "geodetic") {
      q.kind = Kind::geodetic;
      if (peek() != "latitude" && peek() != "longitude" && peek() != "height") return fail("latitude, longitude or height was expected", {"latitude", "longitude", "height"});
      q.word = words_[at_++].text;
      return true;
    }
    if (word == "tensor") return q.kind = Kind::tensor, optional_in(q) && about(q);
    if (word == "covariance") return covariance(q);
    if (word == "skew") return q.kind = Kind::skew, optional_in(q);
    if (word == "none") return q.kind = Kind::none, true;
    at_ = start;
    if (std::find(kQualifiers.begin(), kQualifiers.end(), word) != kQualifiers.end()) {
      q.kind = Kind::unit;
      return qualifier(q);
    }
    return fail("this begins no phrase", kKinds);
  }

  bool stored(Quantity& q) {
    static const std::set<std::string> roles = {"roll", "pitch", "yaw", "heading"};
    while (roles.contains(peek())) q.stored.push_back(words_[at_++].text);
    return !q.stored.empty() || fail("roll, pitch and yaw in their order were expected", {"roll", "pitch", "yaw"});
  }

  bool form(Quantity& q) {
    if (peek() == "mrp") return q.form = Form::mrp, ++at_, true;
    if (peek() == "quaternion") return q.form = Form::quaternion, ++at_, true;
    if (peek() != "rotation") return fail("rotation vector, mrp or quaternion was expected", {"rotation", "mrp", "quaternion"});
    ++at_;
    q.form = Form::rotation_vector;
    return expect("vector");
  }

  bool qualifier(Quantity& q) {
    std::string word = peek();
    std::size_t start = at_++;
    if (word == "deg") return q.unit = Unit::deg, true;
    if (word == "rad") return q.unit = Unit::rad, true;
    if (word == "moving" || word == "intrinsic" || word == "body-fixed") return q.turning = Turning::moving, true;
    if (word == "fixed" || word == "extrinsic" || word == "space-fixed") return q.turning = Turning::fixed, true;
    if (word == "stored") return stored(q);
    if (word == "scalar") {
      if (peek() != "first" && peek() != "last") return fail("first or last was expected", {"first", "last"});
      q.scalar = words_[at_++].text == "first" ? ScalarPlace::first : ScalarPlace::last;
      return true;
    }
    if (word == "hamilton") return q.product = Product::hamilton, true;
    if (word == "shuster" || word == "jpl") return q.product = Product::shuster, true;
    if (word == "maps") {
      if (!expect("by")) return false;
      if (peek() != "qvq*" && peek() != "q*vq") return fail("qvq* or q*vq was expected", {"qvq*", "q*vq"});
      q.maps_by = words_[at_++].text == "qvq*" ? QuaternionMap::qvq_star : QuaternionMap::q_star_vq;
      return true;
    }
    if (word == "seen") return expect("from") && frame(q.seen_from);
    if (word == "row") return q.row_vectors = true, expect("vectors");
    if (word == "row-major") return q.layout = Layout::row_major, true;
    if (word == "column-major") return q.layout = Layout::column_major, true;
    if (word == "left-handed") return q.hand = Hand::left, true;
    if (word == "right-handed") return q.hand = Hand::right, true;
    if (word == "as") return form(q);
    if (word == "small") return q.small = true, true;
    if (word == "increment") return q.increment = true, true;
    at_ = start;
    return fail("this is no qualifier", kQualifiers);
  }

  bool complete(const Quantity& q) {
    bool angles = q.kind == Kind::angles || q.kind == Kind::angle_rates;
    if (angles && letters_ != std::string::npos && q.turning == Turning::unsaid) {
      error_ = {words_[letters_].offset, words_[letters_].text.size(), words_[letters_].text,
                "a sequence in letters is read both ways; add `, moving` or `, fixed`", ""};
      return false;
    }
    return true;
  }

  std::variant<Quantity, Acceptance, Error> accept() {
    ++at_;
    Acceptance acceptance;
    acceptance.rule = peek();
    if (std::find(rules_.begin(), rules_.end(), acceptance.rule) == rules_.end()) return fail("the id of a rule was expected", rules_), error_;
    ++at_;
    if (!expect("because")) return error_;
    for (; at_ < words_.size(); ++at_) acceptance.reason += (acceptance.reason.empty() || peek() == "," || peek() == ":" ? "" : " ") + peek();
    if (acceptance.reason.empty()) return fail("a reason was expected", {}), error_;
    return acceptance;
  }

  std::vector<Word> words_;
  std::size_t end_;
  const std::vector<std::string>& rules_;
  std::size_t at_ = 0;
  std::size_t letters_ = std::string::npos;
  Error error_;
};

// Names before a colon: "v", "roll, pitch, yaw".
std::vector<std::string> leading_names(std::vector<Word>& list) {
  std::vector<std::string> names;
  std::size_t colon = 0;
  while (colon < list.size() && list[colon].text != ":") ++colon;
  if (colon == list.size() || (!list.empty() && list[0].text == "accept")) return names;
  for (std::size_t i = 0; i < colon; ++i)
    if (list[i].text != ",") names.push_back(list[i].text);
  list.erase(list.begin(), list.begin() + std::ptrdiff_t(colon) + 1);
  return names;
}

bool goes_on(const std::string& line) {
  std::vector<Word> first = words(line);
  if (first.empty()) return true;
  if (first[0].text == "," || first[0].text == ";") return true;
  return std::find(kQualifiers.begin(), kQualifiers.end(), first[0].text) != kQualifiers.end();
}

void parse_item(const std::string& text, std::size_t offset, const std::vector<std::string>& rules, Items& out) {
  std::vector<Word> list = words(text, offset);
  if (list.empty()) return;
  std::size_t begin = list.front().offset, end = list.back().offset + list.back().text.size();
  std::vector<std::string> names = leading_names(list);
  auto result = Parser(list, end, rules).run();
  if (auto* error = std::get_if<Error>(&result)) out.errors.push_back(*error);
  else if (auto* quantity = std::get_if<Quantity>(&result)) out.items.push_back({names, *quantity, begin, end - begin});
  else out.items.push_back({names, std::get<Acceptance>(result), begin, end - begin});
}

bool parses(const std::string& text, const std::vector<std::string>& rules) {
  Items trial;
  parse_item(text, 0, rules, trial);
  return trial.errors.empty();
}

}  // namespace

Items parse_items(const std::string& text, const std::vector<std::string>& rules) {
  Items out;
  std::size_t start = 0;
  for (std::size_t i = 0; i <= text.size(); ++i) {
    bool ends = i == text.size() || text[i] == ';';
    if (!ends && text[i] == '\n') {
      std::size_t next = text.find_first_of(";\n", i + 1);
      ends = parses(text.substr(start, i - start), rules) && !goes_on(text.substr(i + 1, next == std::string::npos ? next : next - i - 1));
    }
    if (!ends) continue;
    parse_item(text.substr(start, i - start), start, rules, out);
    start = i + 1;
  }
  if (out.items.empty() && out.errors.empty()) out.errors.push_back({0, text.size(), "", "a phrase is missing behind the bar", ""});
  return out;
}

std::variant<Quantity, Error> parse(const std::string& text) {
  static const std::vector<std::string> no_rules;
  std::vector<Word> list = words(text);
  auto result = Parser(list, text.size(), no_rules).run();
  if (auto* quantity = std::get_if<Quantity>(&result)) return *quantity;
  if (auto* error = std::get_if<Error>(&result)) return *error;
  return Error{0, text.size(), "accept", "an acceptance belongs in a comment", ""};
}

}  // namespace dextral::phrase
