#include "project/frames.h"

#include <algorithm>
#include <set>

#include "phrase/phrase.h"

namespace dextral::project {

namespace {

using NodeKind = JsonNode::Kind;

class FramesReader {
 public:
  FramesReader(const JsonNode& frames, ProjectFile& file, JsonChecker& check)
      : frames_(frames), file_(file), check_(check) {}

  void run() {
    for (const JsonMember& member : frames_.members)
      if (usable(member)) good_.push_back(&member);
    for (const JsonMember* member : good_)
      if (!member->value.find("alias of")) declare(*member);
    for (const JsonMember* member : good_)
      if (member->value.find("alias of")) alias(*member);
    for (const JsonMember* member : good_) parallel(*member);
  }

 private:
  bool usable(const JsonMember& member) {
    if (!is_frame_name(member.key.text)) {
      check_.problem(member.key, "\"" + member.key.text + "\" cannot be the name of a frame",
                     "use letters, digits and _, and no word of the phrases such as to or from");
      return false;
    }
    if (!check_.is(member.value, NodeKind::object, "an object such as {\"axes\": [...]}")) return false;
    check_.keys(member.value, {"axes", "hand", "parallel to", "alias of", "about"});
    file_.declared_frames.push_back(member.key.text);
    return true;
  }

  void declare(const JsonMember& member) {
    const JsonNode& node = member.value;
    FrameFacts facts;
    if (const FrameFacts* builtin = file_.frames.find(member.key.text); builtin && builtin->name == member.key.text)
      facts = *builtin;
    facts.name = member.key.text;
    facts.builtin = false;
    if (std::string about = check_.text(node, "about"); !about.empty()) facts.about = about;
    const JsonNode* axes = node.find("axes");
    const JsonNode* hand = node.find("hand");
    if (axes && !read_axes(*axes, facts)) return;
    if (hand && !read_hand(*hand, facts)) return;
    if (node.find("parallel to")) {
      facts.parallel_to = check_.text(node, "parallel to", "the name of a frame");
      if (!axes) facts.axes.reset();
      if (!axes && !hand) facts.hand.reset();
    }
    if (auto wrong = file_.frames.declare(facts))
      check_.problem(hand && axes ? *hand : axes ? *axes : member.key, *wrong, "correct the frame");
  }

  // None: the frame has no named axes.
  bool read_axes(const JsonNode& axes, FrameFacts& facts) {
    facts.axes.reset();
    facts.hand.reset();
    if (!check_.is(axes, NodeKind::list, "a list of three axes")) return false;
    if (axes.items.empty()) return true;
    if (axes.items.size() != 3) {
      check_.problem(axes, "three axes were expected, not " + std::to_string(axes.items.size()),
                     "write for instance [\"forward\", \"right\", \"down\"]");
      return false;
    }
    std::array<Direction, 3> list{};
    for (std::size_t i = 0; i < 3; ++i) {
      auto found = read_direction(axes.items[i]);
      if (!found) return false;
      list[i] = *found;
    }
    facts.axes = list;
    return true;
  }

  std::optional<Direction> read_direction(const JsonNode& node) {
    if (!check_.is(node, NodeKind::text, "a direction such as \"north\"")) return std::nullopt;
    auto found = direction(node.text);
    if (found) return found;
    std::vector<std::string> words;
    for (int i = 0; i < 18; ++i) words.push_back(text(Direction(i)));
    check_.problem(node, "\"" + node.text + "\" is no direction", word_remedy(node.text, words));
    return std::nullopt;
  }

  bool read_hand(const JsonNode& hand, FrameFacts& facts) {
    if (!check_.is(hand, NodeKind::text, "\"right\" or \"left\"")) return false;
    if (hand.text == "right" || hand.text == "left") {
      facts.hand = hand.text == "left" ? Hand::left : Hand::right;
      return true;
    }
    check_.problem(hand, "\"" + hand.text + "\" is no hand", "write \"right\" or \"left\"");
    return false;
  }

  bool is_known(const std::string& name) const {
    return file_.frames.find(name) ||
           std::any_of(good_.begin(), good_.end(), [&](const JsonMember* member) { return member->key.text == name; });
  }

  bool expect_known(const JsonNode& node) {
    if (is_known(node.text)) return true;
    check_.problem(node, "the frame \"" + node.text + "\" is not declared", frame_remedy(node.text));
    return false;
  }

  std::string frame_remedy(const std::string& name) const {
    auto near = nearest_word(name, file_.frames.names());
    return near ? "did you mean \"" + *near + "\"?" : "declare it under \"frames\"";
  }

  void alias(const JsonMember& member) {
    const JsonNode* of = check_.get(member.value, "alias of", NodeKind::text, "the name of a frame");
    for (const char* key : {"axes", "hand", "parallel to"})
      if (const JsonNode* other = member.value.find(key))
        check_.problem(*other, "an alias is the other frame: it has no \"" + std::string(key) + "\" of its own",
                       "say it of that frame");
    if (!of || !expect_known(*of)) return;
    if (auto wrong = file_.frames.alias(member.key.text, of->text)) check_.problem(*of, *wrong, "name another frame");
  }

  void parallel(const JsonMember& member) {
    const JsonNode* to = member.value.find("parallel to");
    if (!to || to->kind != NodeKind::text || !expect_known(*to)) return;
    std::set<std::string> met{member.key.text};
    std::string at = file_.frames.canonical({to->text, "", false, false, ""}).name;
    const FrameFacts* facts = nullptr;
    while ((facts = file_.frames.find(at)) && met.insert(at).second) {
      if (facts->parallel_to.empty()) return same_axes(member, *to, *facts);
      at = file_.frames.canonical({facts->parallel_to, "", false, false, ""}).name;
    }
    if (facts) check_.problem(*to, "the frames are parallel in a circle", "take one \"parallel to\" out");
  }

  void same_axes(const JsonMember& member, const JsonNode& to, const FrameFacts& other) {
    const FrameFacts* own = file_.frames.find(member.key.text);
    if (!own) return;
    if (own->axes && own->axes != other.axes)
      check_.problem(to, "\"" + own->name + "\" has other axes than \"" + other.name + "\", to which it is parallel",
                     "take \"axes\" or \"parallel to\" out");
    else if (own->hand && own->hand != other.hand)
      check_.problem(to, "\"" + own->name + "\" has another hand than \"" + other.name + "\", to which it is parallel",
                     "say the hand of \"" + other.name + "\" alone");
  }

  const JsonNode& frames_;
  ProjectFile& file_;
  JsonChecker& check_;
  std::vector<const JsonMember*> good_;
};

}  // namespace

bool is_frame_name(const std::string& name) {
  auto parsed = phrase::parse("in " + name);
  const auto* quantity = std::get_if<Quantity>(&parsed);
  return quantity && quantity->kind == Kind::vector && quantity->in == Frame{name, "", false, false, ""};
}

void read_frames(const JsonNode& frames, ProjectFile& file, JsonChecker& check) {
  FramesReader(frames, file, check).run();
}

}  // namespace dextral::project
