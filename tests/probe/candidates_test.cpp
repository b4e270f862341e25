// Which functions are candidates, and how their arguments are flattened.
#include "probe/candidates.h"

#include "tests/probe/source.h"

namespace dextral::probe {
namespace {

std::vector<Candidate> candidates(const std::string& name, const std::string& text, std::vector<std::string> flags = {},
                                  const Wanted& wanted = {}) {
  SourceFile source(name, text, std::move(flags));
  return emit(source.unit(), source.project, wanted, source.files).candidates;
}

std::string said(const Object& object) {
  std::string text;
  for (const Bundle& bundle : object.bundles) {
    const Group& g = bundle.group;
    text += (text.empty() ? "" : " ") + g.formal + ":" + std::to_string(g.count);
    if (g.rows) text += "=" + std::to_string(g.rows) + "x" + std::to_string(g.columns);
    if (g.integer) text += "i";
    if (g.quaternion) text += "q";
    if (g.column_major) text += "c";
  }
  return text + (object.open ? "+" : "");
}

// "p0:9=3x3 p1:3 -> return:3"
std::string said(const Candidate& candidate) {
  std::string text = candidate.name + "(";
  for (const Formal& formal : candidate.formals) text += (text.ends_with("(") ? "" : ", ") + said(formal.object);
  return text + ")" + (candidate.result ? " " + said(candidate.result->object) : "");
}

std::vector<std::string> said(const std::vector<Candidate>& list) {
  std::vector<std::string> texts;
  for (const Candidate& candidate : list) texts.push_back(said(candidate));
  return texts;
}

using Texts = std::vector<std::string>;

TEST(Candidates, ArraysOfC) {
  EXPECT_EQ(said(candidates("kit.c", R"(
    void mxm(const double a[3][3], double b[3][3], double c[3][3]) { c[0][0] = a[0][0] * b[0][0]; }
    void mxv(double (*m)[3], const double* v, float out[]) { out[0] = m[0][0] * v[0]; }
    typedef float quat[4];
    static void conjugate(quat q) { q[1] = -q[1]; }
    void text(const char* s, double* x) { *x = *s; }
    int count(int a, int b) { return a + b; }
    double dot(double a[3], double b[3]) { return a[0] * b[0]; }
  )")),
            (Texts{"mxm(p0:9=3x3, p1:9=3x3, p2:9=3x3)", "mxv(p0:12+, p1:16+, p2:16+)", "conjugate(p0:4q)",
                   "text(p0:1i, p1:16+)", "dot(p0:3, p1:3) return:1"}));
}

TEST(Candidates, StructsAreFlattenedByPath) {
  EXPECT_EQ(said(candidates("state.c", R"(
    struct vec { double x, y, z; };
    struct pose { double R[3][3]; struct vec t; int frame; };
    struct vec move(struct pose p, const struct vec* v) { return *v; }
    void set(struct pose* p, float f) { p->t.x = f; }
  )")),
            (Texts{"move(p0.R:9=3x3 p0.t:3 p0.frame:1i, p1:3) return:3", "set(p0.R:9=3x3 p0.t:3 p0.frame:1i, p1:1)"}));
}

TEST(Candidates, ClassesWithPrivateMembers) {
  EXPECT_EQ(said(candidates("dcm.cpp", R"(
    #include <array>
    class Dcm {
      double m_[3][3];
     public:
      Dcm() {}
      ~Dcm() {}
      Dcm transposed() const { return *this; }
      double operator()(int i, int j) const { return m_[i][j]; }
      static Dcm turn(double angle) { return {}; }
      operator double() const { return m_[0][0]; }
    };
    class Quaternion { std::array<float, 4> q; public: Quaternion& operator*=(const Quaternion&) { return *this; } };
  )")),
            (Texts{"Dcm::Dcm(this:9=3x3)", "Dcm::transposed(this:9=3x3) return:9=3x3",
                   "Dcm::operator()(this:9=3x3, p0:1i, p1:1i) return:1", "Dcm::turn(p0:1) return:9=3x3",
                   "Dcm::operator double(this:9=3x3) return:1", "Quaternion::operator*=(this:4q, p0:4q) return:4q"}));
}

TEST(Candidates, ClassesOfLibraries) {
  EXPECT_EQ(said(candidates("eigen.cpp", R"(
    #include <Eigen/Geometry>
    Eigen::Matrix3d f(const Eigen::Matrix3d& a, Eigen::Vector3f v) { return a; }
    Eigen::Quaterniond g(const Eigen::Isometry3d& t) { return Eigen::Quaterniond(t.linear()); }
    Eigen::Matrix<double, 3, 3, Eigen::RowMajor> h(double x) { return Eigen::Matrix3d::Identity() * x; }
  )", eigen())),
            (Texts{"f(p0:9=3x3c, p1:3) return:9=3x3c", "g(p0:16=4x4c) return:4q", "h(p0:1) return:9=3x3"}));
}

TEST(Candidates, InstancesOfTemplates) {
  EXPECT_EQ(said(candidates("template.cpp", R"(
    template <class T> struct Vec { T x, y, z; T dot(const Vec& o) const { return x * o.x + y * o.y + z * o.z; } };
    template <class T> T twice(T t) { return t + t; }
    double use(const Vec<double>& v) { return twice(v.dot(v)); }
  )")),
            (Texts{"Vec::dot(this:3, p0:3) return:1", "twice(p0:1) return:1", "use(p0:3) return:1"}));
}

TEST(Candidates, SelectorsAreTriedWithWhatIsCompared) {
  const std::vector<Candidate> list = candidates("select.cpp", R"(
    enum class Sequence { zyx = 3, xyz = 7 };
    double by_enum(Sequence s, double x) { return s == Sequence::zyx ? x : -x; }
    double by_int(int s, double x) { switch (s) { case 321: return x; case 123: return -x; } return 0; }
    double by_bool(bool s, double x) { return s ? x : -x; }
    double axis(int i, const double* v) { return v[i]; }
    double use(const double* v) { return axis(2, v) + axis(1, v); }
  )");
  ASSERT_EQ(list.size(), 5u);
  auto values = [&](std::size_t i) { return list[i].formals[0].object.bundles[0].values; };
  EXPECT_EQ(values(0), (std::vector<long long>{3, 7}));
  EXPECT_EQ(values(1), (std::vector<long long>{123, 321}));
  EXPECT_EQ(values(2), (std::vector<long long>{0, 1}));
  EXPECT_EQ(values(3), (std::vector<long long>{1, 2}));
}

TEST(Candidates, AskedByNameTellsWhyNot) {
  const char* text = R"(
    #include <cstdarg>
    namespace nav { struct File; double size(File* f, double x) { return x; } double many(double x, ...) { return x; } }
  )";
  const std::vector<Candidate> size = candidates("why.cpp", text, {}, {"size", {}});
  ASSERT_EQ(size.size(), 1u);
  EXPECT_EQ(size[0].refusal, "takes `File *`");
  const std::vector<Candidate> many = candidates("why.cpp", text, {}, {"nav::many", {}});
  ASSERT_EQ(many.size(), 1u);
  EXPECT_EQ(many[0].refusal, "takes a variable number of arguments");
  EXPECT_TRUE(candidates("why.cpp", text, {}, {"any", {}}).empty());
}

}  // namespace
}  // namespace dextral::probe
