#include "project/model.h"

#include <algorithm>
#include <cmath>
#include <set>

#include "project/json_text.h"

namespace dextral::project {

namespace {

using NodeKind = JsonNode::Kind;

// In the order of Shape.
const std::vector<std::string>& shape_words() {
  static const std::vector<std::string> words = {"unknown",  "number",     "vector", "row",    "matrix",
                                                 "rotation", "quaternion", "pose",   "object", "container"};
  return words;
}

constexpr int kMostArguments = 40;

// How many operands an operation has: at least, at most.
struct Arity {
  const char* operation;
  int least, most;
};

constexpr Arity kOperations[] = {
    {"product", 2, 8},     {"transpose", 1, 1}, {"inverse", 1, 1}, {"copy", 1, 1},    {"sum", 1, 8},
    {"difference", 2, 8},  {"cross", 2, 2},     {"dot", 1, 8},     {"skew", 1, 1},    {"unskew", 1, 1},
    {"translation", 1, 1}, {"pose", 1, 2},      {"column", 1, 1},  {"row", 1, 1},     {"transform", 2, 2},
    {"columns", 3, 3},     {"rows", 3, 3},
    {"shuffle", 1, 1},     {"literal", 0, 0},   {"opaque", 0, 8},  {"element", 1, 1}, {"elements", 0, 16},
    {"stream", 0, 2},      {"part", 1, 1},      {"fill", 0, 8},    {"build", 0, 8},   {"extract", 0, 1}};

std::vector<std::string> operation_words() {
  std::vector<std::string> words;
  for (const Arity& arity : kOperations) words.push_back(arity.operation);
  return words;
}

const Arity* arity_of(const std::string& operation) {
  auto found = std::find_if(std::begin(kOperations), std::end(kOperations),
                            [&](const Arity& arity) { return arity.operation == operation; });
  return found == std::end(kOperations) ? nullptr : found;
}

class ModelReader {
 public:
  ModelReader(const std::string& file, std::vector<Problem>& problems)
      : check_(file, "docs/library-models.md", problems) {}

  LibraryModel run(const JsonNode& root) {
    if (!check_.is(root, NodeKind::object, "a library model, an object")) return {};
    check_.keys(root, {"library", "about", "types", "functions", "check"});
    model_.library = check_.text(root, "library", "the name of the library");
    if (!root.find("library")) check_.problem(root, "the key \"library\" is missing", "name the library");
    check_.text(root, "about");
    check_.get(root, "check", NodeKind::object, "an object");
    each(root, "types", &ModelReader::type);
    each(root, "functions", &ModelReader::function);
    return std::move(model_);
  }

 private:
  void each(const JsonNode& root, const char* key, void (ModelReader::*visit)(const JsonNode&)) {
    const JsonNode* list = check_.get(root, key, NodeKind::list, "a list of objects");
    if (!list) return;
    for (const JsonNode& node : list->items)
      if (check_.is(node, NodeKind::object, "an object")) (this->*visit)(node);
  }

  std::vector<std::string> names(const JsonNode& node) {
    const JsonNode* name = node.find("name");
    if (!name) check_.problem(node, "the key \"name\" is missing", "give the qualified name");
    if (!name) return {};
    if (name->kind == NodeKind::list) return texts(*name, "a qualified name");
    if (!check_.is(*name, NodeKind::text, "a qualified name, or a list of them") || !filled(*name)) return {};
    return {name->text};
  }

  bool filled(const JsonNode& text) {
    if (!text.text.empty()) return true;
    check_.problem(text, "a name cannot be empty", "give the qualified name");
    return false;
  }

  std::vector<std::string> texts(const JsonNode& list, const char* what) {
    std::vector<std::string> out;
    for (const JsonNode& item : list.items)
      if (check_.is(item, NodeKind::text, what) && filled(item)) out.push_back(item.text);
    return out;
  }

  // A whole number from `least` on; `otherwise` where it is missing or wrong.
  int number(const JsonNode& node, const char* key, int least, int otherwise) {
    const JsonNode* found = node.find(key);
    return found && is_count(*found, least) ? int(found->number) : otherwise;
  }

  bool is_count(const JsonNode& node, int least) {
    bool good = node.kind == NodeKind::number && node.number >= least && node.number < kMostArguments &&
                node.number == std::floor(node.number);
    if (!good)
      check_.problem(node, "a whole number from " + std::to_string(least) + " on was expected",
                     "0 is the object or the first of what is counted");
    return good;
  }

  std::vector<int> numbers(const JsonNode& node, const char* key, int most) {
    std::vector<int> out;
    const JsonNode* list = check_.get(node, key, NodeKind::list, "a list of argument numbers");
    if (!list) return out;
    for (const JsonNode& item : list->items)
      if (is_count(item, 0) && is_argument(item, most)) out.push_back(int(item.number));
    return out;
  }

  bool is_argument(const JsonNode& node, int most) {
    if (node.number <= most) return true;
    check_.problem(
        node, "there is no argument " + std::to_string(int(node.number)) + ": \"given\" lists " + std::to_string(most),
        "0 is the object, 1 the first argument");
    return false;
  }

  // One of a few words; empty where it is missing or wrong.
  std::string word(const JsonNode& node, const char* key, const std::vector<std::string>& words) {
    const JsonNode* found = check_.get(node, key, NodeKind::text, "a word");
    if (!found || std::find(words.begin(), words.end(), found->text) != words.end()) return found ? found->text : "";
    check_.problem(*found, "\"" + found->text + "\" is no " + key, word_remedy(found->text, words));
    return "";
  }

  void type(const JsonNode& node) {
    check_.keys(
        node, {"name", "shape", "rows", "columns", "rows argument", "columns argument", "inverse", "element", "about"});
    TypeModel type;
    std::string shape = word(node, "shape", shape_words());
    if (!shape.empty())
      type.shape = Shape(std::find(shape_words().begin(), shape_words().end(), shape) - shape_words().begin());
    type.rows = check_.text(node, "rows");
    type.columns = check_.text(node, "columns");
    type.rows_argument = number(node, "rows argument", 0, -1);
    type.columns_argument = number(node, "columns argument", 0, -1);
    type.inverse_form = inverse(node);
    type.element = number(node, "element", 0, -1);
    for (const std::string& name : names(node)) {
      type.name = name;
      model_.types.push_back(type);
      types_.insert(name);
    }
  }

  std::string inverse(const JsonNode& node) {
    std::string form = check_.text(node, "inverse");
    if (!form.empty() && form.find("{}") == std::string::npos)
      check_.problem(*node.find("inverse"), "the inverse has no place for its operand",
                     "write {} where the operand stands, as in \"{}.transpose()\"");
    return form;
  }

  std::vector<std::string> given(const JsonNode& node) {
    const JsonNode* list = check_.get(node, "given", NodeKind::list, "a list of shapes");
    if (!list) return {};
    for (const JsonNode& item : list->items)
      if (item.kind == NodeKind::text) is_shape(item);
    return texts(*list, "a shape");
  }

  // Or "any", or a type that this file models.
  bool is_shape(const JsonNode& node) {
    std::vector<std::string> words = shape_words();
    words.push_back("any");
    if (types_.contains(node.text) || std::find(words.begin(), words.end(), node.text) != words.end()) return true;
    check_.problem(node, "\"" + node.text + "\" is no shape and no type of this file", word_remedy(node.text, words));
    return false;
  }

  const Arity* operation(const JsonNode& node) {
    const JsonNode* is = check_.get(node, "is", NodeKind::text, "the name of an operation");
    if (!is) {
      if (!node.find("is")) check_.problem(node, "the key \"is\" is missing", "say the operation");
      return nullptr;
    }
    const Arity* arity = arity_of(is->text);
    if (!arity) check_.problem(*is, "\"" + is->text + "\" is no operation", word_remedy(is->text, operation_words()));
    return arity;
  }

  void function(const JsonNode& node) {
    check_.keys(node, {"name", "given", "object", "is", "of", "transposed", "into", "also returned", "order", "base",
                       "factor", "index", "sequence", "sense", "turning", "unit", "angles", "about"});
    const Arity* arity = operation(node);
    FunctionModel function;
    function.given = given(node);
    if (const JsonNode* object = check_.get(node, "object", NodeKind::text, "a shape"); object && is_shape(*object))
      function.object = object->text;
    operands(node, arity, function);
    builder(node, function);
    std::vector<std::string> all = names(node);
    if (!arity) return;
    function.is = arity->operation;
    for (const std::string& name : all) {
      function.name = name;
      if (first(node, function)) model_.functions.push_back(function);
    }
  }

  void operands(const JsonNode& node, const Arity* arity, FunctionModel& function) {
    int most = node.find("given") ? int(function.given.size()) : kMostArguments;
    function.of = numbers(node, "of", most);
    function.transposed = numbers(node, "transposed", most);
    const JsonNode* of = node.find("of");
    int count = int(function.of.size());
    if (arity && of && of->kind == NodeKind::list &&
        (int(of->items.size()) < arity->least || int(of->items.size()) > arity->most))
      check_.problem(*of,
                     std::string("the operation ") + arity->operation + " takes " + count_text(*arity) + ", not " +
                         std::to_string(of->items.size()),
                     "list the arguments in the order of the algebra");
    for (int argument : function.transposed)
      if (count && std::find(function.of.begin(), function.of.end(), argument) == function.of.end())
        check_.problem(*node.find("transposed"),
                       "argument " + std::to_string(argument) + " is transposed but no operand",
                       "list it in \"of\" too");
    function.into = into(node, most);
    if (const JsonNode* also = check_.get(node, "also returned", NodeKind::boolean, "true or false"))
      function.also_returned = also->truth;
    if (function.also_returned && function.into == kReturn)
      check_.problem(*node.find("also returned"), "nothing is written that could be returned too", "say \"into\"");
  }

  static std::string count_text(const Arity& arity) {
    std::string text = std::to_string(arity.least);
    if (arity.most > arity.least) text += " to " + std::to_string(arity.most);
    return text + (text == "1" ? " operand" : " operands");
  }

  int into(const JsonNode& node, int most) {
    const JsonNode* found = node.find("into");
    if (!found || (found->kind == NodeKind::text && found->text == "result")) return kReturn;
    if (found->kind == NodeKind::text) {
      check_.problem(*found, "\"" + found->text + "\" is no place for a result",
                     "write \"result\" or an argument number");
      return kReturn;
    }
    return is_count(*found, 0) && is_argument(*found, most) ? int(found->number) : kReturn;
  }

  void builder(const JsonNode& node, FunctionModel& function) {
    function.order = word(node, "order", {"rows", "columns", "xyzw", "wxyz"});
    function.base = number(node, "base", 0, 0);
    function.index = number(node, "index", 0, -1);
    function.factor = factor(node);
    function.sense = word(node, "sense", {"active", "passive"});
    function.turning = word(node, "turning", {"moving", "fixed"});
    function.unit = word(node, "unit", {"rad", "deg"});
    function.sequence = sequence(node);
    // The angles are arguments, or the components of one vector.
    bool one_vector = function.given.size() == 1 && function.given[0] != "number";
    int most = !node.find("given") ? kMostArguments : one_vector ? 3 : int(function.given.size());
    function.angles = numbers(node, "angles", most);
    std::size_t count = function.angles.size();
    if (count > 1 && !function.sequence.empty() && count != function.sequence.size())
      check_.problem(*node.find("angles"),
                     "the sequence has " + std::to_string(function.sequence.size()) + " axes, and " +
                         std::to_string(count) + " angles are listed",
                     "list one angle for each axis, or one vector");
  }

  int factor(const JsonNode& node) {
    const JsonNode* found = node.find("factor");
    if (!found) return 0;
    if (found->kind == NodeKind::number && std::abs(found->number) == 1) return int(found->number);
    check_.problem(*found, "a factor is 1 or -1", "leave it out where the copy is scaled or normalised");
    return 0;
  }

  std::string sequence(const JsonNode& node) {
    std::string text = check_.text(node, "sequence", "axes such as \"321\"");
    bool good = text.size() <= 3 && text.find_first_not_of("123") == std::string::npos &&
                std::adjacent_find(text.begin(), text.end()) == text.end();
    if (good) return text;
    check_.problem(*node.find("sequence"), "\"" + text + "\" is no sequence of axes",
                   "write one to three of the digits 1, 2, 3, no two alike side by side");
    return "";
  }

  // An entry after another with the same name and conditions would never count.
  bool first(const JsonNode& node, const FunctionModel& function) {
    std::string conditions = function.name + "(";
    for (const std::string& shape : function.given) conditions += shape + ",";
    if (node.find("given")) conditions += ")";
    if (entries_.insert(conditions + function.object).second) return true;
    check_.problem(node, "\"" + function.name + "\" stands twice with the same conditions", "take one of the two out");
    return false;
  }

  JsonChecker check_;
  LibraryModel model_;
  std::set<std::string> types_, entries_;
};

}  // namespace

LibraryModel read_model(const std::string& file, const std::string& text, std::vector<Problem>& problems) {
  std::size_t before = problems.size();
  JsonNode root = read_json(file, text, problems);
  if (problems.size() != before) return {};
  return ModelReader(file, problems).run(root);
}

void ModelTable::add(const LibraryModel& model) {
  for (const TypeModel& type : model.types) types_.insert_or_assign(type.name, type);
  std::map<std::string, std::vector<FunctionModel>> fresh;
  for (const FunctionModel& function : model.functions) fresh[function.name].push_back(function);
  for (auto& [name, list] : fresh) {
    std::vector<FunctionModel>& all = functions_[name];
    all.insert(all.begin(), list.begin(), list.end());
  }
}

const TypeModel* ModelTable::type(const std::string& name) const {
  auto found = types_.find(name);
  return found == types_.end() ? nullptr : &found->second;
}

const std::vector<FunctionModel>* ModelTable::functions(const std::string& name) const {
  auto found = functions_.find(name);
  return found == functions_.end() ? nullptr : &found->second;
}

namespace {

std::string owner_of(const std::string& name) {
  const std::size_t colon = name.rfind("::");
  return colon == std::string::npos ? "" : name.substr(0, colon);
}

std::string last_of(const std::string& name) { return name.substr(owner_of(name).empty() ? 0 : name.rfind("::") + 2); }

// The one argument that just one of the two takes inverted; -1: none, or several.
int difference(std::vector<int> a, std::vector<int> b) {
  std::sort(a.begin(), a.end());
  std::sort(b.begin(), b.end());
  std::vector<int> only;
  std::set_symmetric_difference(a.begin(), a.end(), b.begin(), b.end(), std::back_inserter(only));
  return only.size() == 1 ? only[0] : -1;
}

// Letters that two names share at their ends.
std::size_t likeness(const std::string& a, const std::string& b) {
  auto same = [](char x, char y) { return std::tolower(static_cast<unsigned char>(x)) == std::tolower(static_cast<unsigned char>(y)); };
  const auto front = std::mismatch(a.begin(), a.end(), b.begin(), b.end(), same).first - a.begin();
  const auto back = std::mismatch(a.rbegin(), a.rend(), b.rbegin(), b.rend(), same).first - a.rbegin();
  return std::size_t(front + back);
}

}  // namespace

std::vector<std::pair<int, std::string>> ModelTable::twins(const FunctionModel& of) const {
  std::vector<std::pair<int, std::string>> found;
  if (last_of(of.name).starts_with("operator")) return found;
  // Names of one library begin alike.
  const std::string start = owner_of(of.name).empty() ? of.name.substr(0, 3) : owner_of(of.name) + "::";
  for (auto it = functions_.lower_bound(start); it != functions_.end() && it->first.starts_with(start); ++it)
    for (const FunctionModel& other : it->second) {
      const bool alike = other.is == of.is && other.of == of.of && other.into == of.into && other.given == of.given;
      const int argument = alike && owner_of(other.name) == owner_of(of.name) ? difference(other.transposed, of.transposed) : -1;
      if (argument >= 0 && !last_of(other.name).starts_with("operator")) found.emplace_back(argument, last_of(other.name));
    }
  const std::string own = last_of(of.name);
  std::stable_sort(found.begin(), found.end(), [&](const auto& a, const auto& b) { return likeness(own, a.second) > likeness(own, b.second); });
  return found;
}

}  // namespace dextral::project
