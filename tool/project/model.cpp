#include "project/model.h"

#include <algorithm>
#include <set>

#include "core/frame.h"
#include "project/json_text.h"

namespace dextral::project {

namespace {

const std::vector<std::pair<std::string, Shape>> kShapes = {
    {"unknown", Shape::unknown}, {"number", Shape::number}, {"vector", Shape::vector}, {"row", Shape::row},
    {"matrix", Shape::matrix}, {"rotation", Shape::rotation}, {"quaternion", Shape::quaternion}, {"pose", Shape::pose},
    {"object", Shape::object}, {"container", Shape::container}};
const std::vector<std::string> kOperations = {
    "product", "transpose", "inverse", "copy", "sum", "difference", "cross", "dot", "skew", "unskew", "translation", "pose",
    "column", "row", "transform", "shuffle", "literal", "opaque", "element", "elements", "stream", "part", "fill", "build", "extract"};

class ModelReader {
 public:
  ModelReader(const std::string& file, std::vector<Problem>& problems) : file_(file), problems_(problems) {}

  LibraryModel run(const JsonNode& root) {
    LibraryModel model;
    if (!is(root, JsonNode::Kind::object, "a library model")) return model;
    keys(root, {"library", "about", "types", "functions", "check"});
    if (const JsonNode* name = root.find("library")) model.library = name->text;
    else problem(root, "the key \"library\" is missing", "name the library");
    if (const JsonNode* types = root.find("types"))
      for (const JsonNode& node : types->items) type(node, model);
    if (const JsonNode* functions = root.find("functions"))
      for (const JsonNode& node : functions->items) function(node, model);
    return model;
  }

 private:
  void problem(const JsonNode& at, const std::string& message, const std::string& remedy) {
    problems_.push_back({file_, at.line, at.column, message, remedy});
  }
  bool is(const JsonNode& node, JsonNode::Kind kind, const std::string& what) {
    if (node.kind == kind) return true;
    problem(node, what + " was expected here", "see docs/library-models.md");
    return false;
  }
  void keys(const JsonNode& node, const std::vector<std::string>& known) {
    for (const JsonMember& member : node.members) {
      if (std::find(known.begin(), known.end(), member.key.text) != known.end()) continue;
      auto near = nearest_word(member.key.text, known);
      problem(member.key, "the key \"" + member.key.text + "\" is unknown", near ? "did you mean \"" + *near + "\"?" : "take it out");
    }
  }
  Shape shape(const JsonNode& node) {
    for (const auto& [word, shape] : kShapes)
      if (node.text == word) return shape;
    problem(node, "\"" + node.text + "\" is no shape", "vector, matrix, rotation, quaternion, pose, number, row, object, container");
    return Shape::unknown;
  }
  static std::string text(const JsonNode& node, const char* key) {
    const JsonNode* found = node.find(key);
    return found ? found->text : "";
  }
  static int number(const JsonNode& node, const char* key, int otherwise) {
    const JsonNode* found = node.find(key);
    return found && found->kind == JsonNode::Kind::number ? int(found->number) : otherwise;
  }
  std::vector<int> numbers(const JsonNode& node, const char* key) {
    std::vector<int> list;
    const JsonNode* found = node.find(key);
    if (!found || !is(*found, JsonNode::Kind::list, "a list of argument numbers")) return list;
    for (const JsonNode& item : found->items) {
      if (item.kind == JsonNode::Kind::number && item.number >= 0 && item.number < 40) list.push_back(int(item.number));
      else problem(item, "an argument number was expected", "0 is the object, 1 the first argument");
    }
    return list;
  }
  std::vector<std::string> names(const JsonNode& node) {
    std::vector<std::string> list;
    const JsonNode* name = node.find("name");
    if (!name) problem(node, "the key \"name\" is missing", "give the qualified name");
    else if (name->kind == JsonNode::Kind::text) list.push_back(name->text);
    else
      for (const JsonNode& item : name->items) list.push_back(item.text);
    return list;
  }

  void type(const JsonNode& node, LibraryModel& model) {
    if (!is(node, JsonNode::Kind::object, "a type")) return;
    keys(node, {"name", "shape", "rows", "columns", "rows argument", "columns argument", "inverse", "element", "about"});
    TypeModel type;
    if (const JsonNode* s = node.find("shape")) type.shape = shape(*s);
    type.rows = text(node, "rows");
    type.columns = text(node, "columns");
    type.rows_argument = number(node, "rows argument", -1);
    type.columns_argument = number(node, "columns argument", -1);
    type.inverse_form = text(node, "inverse");
    type.element = number(node, "element", -1);
    for (const std::string& name : names(node)) {
      type.name = name;
      model.types.push_back(type);
    }
  }

  void function(const JsonNode& node, LibraryModel& model) {
    if (!is(node, JsonNode::Kind::object, "a function")) return;
    keys(node, {"name", "given", "object", "is", "of", "transposed", "into", "also returned", "order", "base", "index", "sequence",
                "sense", "turning", "unit", "angles", "about"});
    FunctionModel function;
    function.is = text(node, "is");
    if (std::find(kOperations.begin(), kOperations.end(), function.is) == kOperations.end()) {
      const JsonNode* is = node.find("is");
      auto near = nearest_word(function.is, kOperations);
      return problem(is ? *is : node, "\"" + function.is + "\" is no operation", near ? "did you mean \"" + *near + "\"?" : "see docs/library-models.md");
    }
    if (const JsonNode* given = node.find("given"))
      for (const JsonNode& item : given->items) function.given.push_back(item.text);
    function.object = text(node, "object");
    function.of = numbers(node, "of");
    function.transposed = numbers(node, "transposed");
    function.angles = numbers(node, "angles");
    function.into = number(node, "into", kReturn);
    const JsonNode* returned = node.find("also returned");
    function.also_returned = returned && returned->truth;
    function.order = text(node, "order");
    function.base = number(node, "base", 0);
    function.index = number(node, "index", -1);
    function.sequence = text(node, "sequence");
    function.sense = text(node, "sense");
    function.turning = text(node, "turning");
    function.unit = text(node, "unit");
    for (const std::string& name : names(node)) {
      function.name = name;
      model.functions.push_back(function);
    }
  }

  const std::string& file_;
  std::vector<Problem>& problems_;
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
  for (const FunctionModel& function : model.functions) functions_[function.name].push_back(function);
}

const TypeModel* ModelTable::type(const std::string& name) const {
  auto found = types_.find(name);
  return found == types_.end() ? nullptr : &found->second;
}

const std::vector<FunctionModel>* ModelTable::functions(const std::string& name) const {
  auto found = functions_.find(name);
  return found == functions_.end() ? nullptr : &found->second;
}

}  // namespace dextral::project
