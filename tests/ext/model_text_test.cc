#include "ext/model_text.h"

#include <cmath>
#include <random>

#include "core/model/columns.h"
#include "core/model/fit.h"
#include "ext/packed_numbers.h"
#include "tests/reference/reference.h"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size);

namespace ladderline::testing {
namespace {

using Json = nlohmann::ordered_json;

// Texts written by models_r.R, by the documentation of the format alone.
std::vector<Json> Texts() {
  std::vector<Json> texts;
  const Json file = ReadOrderedJson("models_r.json");
  for (const auto& c : file["cases"]) texts.push_back(c["model"]);
  return texts;
}

Model Read(const Json& json) {
  Result<Model> model = ModelFromText(json.dump());
  EXPECT_TRUE(model.ok()) << model.error();
  return std::move(model).value();
}

std::string ErrorOf(const std::string& text) {
  const Result<Model> model = ModelFromText(text);
  return model.ok() ? "(a model)" : model.error();
}

// A whole number is written without a point; the value is the same.
void ExpectSame(const nlohmann::json& a, const nlohmann::json& b, const std::string& place) {
  if (a.is_number()) {
    ASSERT_TRUE(b.is_number()) << place;
    EXPECT_EQ(a.get<double>(), b.get<double>()) << place;
  } else if (a.is_array() || a.is_object()) {
    ASSERT_EQ(a.size(), b.size()) << place;
    for (const auto& item : a.items()) {
      const std::string inner = place + "/" + item.key();
      ASSERT_TRUE(a.is_array() || b.contains(item.key())) << inner;
      ExpectSame(item.value(), a.is_array() ? b[std::stoul(item.key())] : b[item.key()], inner);
    }
  } else {
    EXPECT_EQ(a, b) << place;
  }
}

TEST(ModelText, ADocumentedTextComesBackNumberForNumber) {
  for (const Json& text : Texts()) {
    const std::string written = ModelText(Read(text));
    ExpectSame(nlohmann::json::parse(text.dump()), nlohmann::json::parse(written), "");
    EXPECT_EQ(ModelText(Read(Json::parse(written))), written);
  }
}

TEST(ModelText, TheVersionIsTheFirstKey) {
  EXPECT_EQ(ModelText(Read(Texts()[0])).find("{\"ladderline_model\":1,"), 0U);
}

TEST(ModelText, KeepsWhatTheReferenceTextsLack) {
  Json text = Texts()[0];
  text["clusters"] = 2;
  text["checks_wanted"] = false;
  text["checks"] = Json::array({{{"name", "white"},
                                 {"status", "look"},
                                 {"statistic", 0.1},
                                 {"df", 2},
                                 {"p_value", 1e-300},
                                 {"finding", "f \"“\n"},
                                 {"remedy", "r"}}});
  text["release_floor"] = 3;
  text["residuals"] = {{"quantiles", {nullptr, -2, -1, -1, -0.5, 0, 0.5, 1, 1, 2, 3}},
                       {"fitted", {0, 2}},
                       {"bins", {{4, 0.1, 0.2}, {0, nullptr, nullptr}}}};
  // 31 rows
  text["response_histogram"] = {
      {"original", {{"edges", {0, 0.1, 0.25, 100}}, {"rows", {30, 0, 1}}}},
      {"scaled", {{"edges", {-2.5, 4}}, {"rows", {31}}}}};
  text["facts"]["aic"] = 12.5;  // other than 2 (parameters − log-likelihood)
  text["facts"]["bic_original"] = 17;
  text["tests"] = {{1, 1, 1.5, 0.5, 9.25, 1e-17}, {2, 0, nullptr}};
  text["influence"] = {{nullptr, 0.25, 2.5},
                       {9223372036854775807, 0.25, nullptr, 0.4},
                       {-12, 0.1, 1},
                       {3.0, 0.1, 1, 0.75},
                       {"Fall 7 “β”", 0.1, 1}};
  text["basis"]["slope_low"] = PackNumbers(std::vector<double>{-1e-18, 0});
  text["basis"]["factor_low"] = PackNumbers(std::vector<double>{1e-17, 0, 1e-17, 0, -1e-18, 0});
  text["columns"][1]["missing"] = 3;
  text["columns"][1]["note"] = "from numeric text";
  text["terms"][2]["note"] = "n";
  text["terms"][2]["cluster"] = 0.25;
  const Model model = Read(text);
  EXPECT_TRUE(std::holds_alternative<std::monostate>(model.influence[0].key));
  EXPECT_EQ(std::get<std::int64_t>(model.influence[1].key), 9223372036854775807);
  EXPECT_EQ(std::get<double>(model.influence[3].key), 3);
  EXPECT_TRUE(model.basis.fit.extended);
  EXPECT_EQ(model.residuals.bins[0].fitted_high, 1);
  EXPECT_EQ(model.response_histogram.original[2].low, 0.25);
  EXPECT_EQ(model.response_histogram.original[2].rows, 1U);
  EXPECT_EQ(model.terms[1].variance_inflation, 1.5);
  ExpectSame(nlohmann::json::parse(text.dump()), nlohmann::json::parse(ModelText(model)), "");
}

// What the text leaves out, by its definition: the normal log-likelihood, AIC and BIC, the overall
// F, the F and p of one coefficient, and Cook's distance by the leverage h and the external t: r² =
// t² df / (df − 1 + t²), r² h / (1 − h)/k.
TEST(ModelText, WhatFollowsFromOthersIsFilledIn) {
  Json text = Texts()[0];  // 31 rows, 3 coefficients, 28 residual degrees of freedom
  text["facts"]["r_squared"] = 0.75;
  text["tests"] = Json::array({Json::array({1, 1, 1.5})});
  text["influence"] = Json::array({Json::array({7, 0.25, 2})});
  const Model model = Read(text);
  const double log_likelihood = 35.27065944800058;  // logLik() of R 4.2 for this model
  EXPECT_TRUE(Agrees(log_likelihood, model.facts.log_likelihood, 13.5));
  EXPECT_TRUE(Agrees(-2 * log_likelihood + 8, model.facts.aic, 13.5));
  EXPECT_TRUE(Agrees(-2 * log_likelihood + 4 * std::log(31), model.facts.bic, 13.5));
  EXPECT_TRUE(Agrees(1 - 0.25 * 30 / 28, model.facts.adjusted_r_squared, 14.5));
  EXPECT_EQ(model.facts.f_df1, 2);
  EXPECT_EQ(model.facts.f_df2, 28);
  EXPECT_TRUE(Agrees(42, model.facts.f, 14.5));  // 0.75/2 over 0.25/28
  // With df1 = 2 the upper tail is (1 + 2 f / df2)^(−df2/2) = 4^-14.
  EXPECT_TRUE(Agrees(std::pow(4, -14), model.facts.f_p, 12));
  const double t = model.terms[1].coefficient / model.terms[1].standard_error[0];
  EXPECT_TRUE(Agrees(t * t, model.tests[0].f, 14.5));
  EXPECT_TRUE(
      Agrees(4.0 * 28 / (27 + 4) * 0.25 / 0.75 / 3, model.influence[0].cooks_distance, 14.5));
  ExpectSame(nlohmann::json::parse(text.dump()), nlohmann::json::parse(ModelText(model)), "");
}

TEST(ModelText, ADroppedTermLeavesItsPlaceInTheBasis) {
  Json text = Texts()[0];
  Json dropped = text["terms"][2];
  dropped["name"] = "copy";
  dropped["factors"] = Json::array({Json::array({2, 1})});
  dropped["coefficient"] = nullptr;
  dropped["note"] = "left out: repeats girth";
  dropped["repeats"] = Json::array({Json::array({0, -0.5}), Json::array({1, 2})});
  text["terms"].insert(text["terms"].begin() + 2, dropped);
  const Model model = Read(text);
  EXPECT_EQ(model.basis.fit.columns, 4);
  EXPECT_EQ(model.basis.fit.kept, (std::vector<Index>{0, 1, 3}));
  EXPECT_EQ(model.terms[2].repeats[1].coefficient, 2);
  text["terms"][2]["repeats"][0][0] = 2;
  EXPECT_EQ(ErrorOf(text.dump()), "terms[2].repeats must name terms that are kept");
  text["terms"][2]["repeats"][0][0] = 0;
  ExpectSame(nlohmann::json::parse(text.dump()), nlohmann::json::parse(ModelText(model)), "");
}

// Twelve rows of a quadratic, a category and their like.
Json PolynomialAndProduct() {
  std::vector<Label> labels;
  for (const char* text :
       {"y", "a | polynomial 2", "b | number", "t | category", "p | product b t"})
    labels.push_back(ReadLabel(text).value());
  ColumnSet set = ColumnSet::Make(std::move(labels)).value();
  for (int i = 0; i < 12; ++i) {
    const auto number = [](double x) { return Cell{.kind = Cell::Kind::kNumber, .number = x}; };
    const Cell level = {.kind = Cell::Kind::kText, .text = i % 3 == 0 ? "u" : "v"};
    EXPECT_FALSE(
        set.Add(std::vector<Cell>{number((i * 7) % 5), number(100 + i), number((i * 5) % 7), level,
                                  Cell{.kind = Cell::Kind::kText}}));
  }
  return Json::parse(ModelText(FitOls(set, {}).value()));
}

TEST(ModelText, PolynomialsAndProductsComeBackAsTheyWere) {
  const Json text = PolynomialAndProduct();
  EXPECT_EQ(ModelText(Read(text)), text.dump());
  const Model model = Read(text);
  EXPECT_EQ(model.columns[1].degree, 2);
  EXPECT_EQ(model.columns[4].parts, (std::array<int, 2>{2, 3}));
  EXPECT_EQ(model.terms[5].factors.size(), 2u);
  EXPECT_GT(model.terms[2].variance_inflation, 1e3);
  EXPECT_NE(model.basis.fit.coefficient[1].hi, model.terms[1].coefficient);
  const auto refused = [&](auto&& spoil) {
    Json spoilt = text;
    spoil(spoilt);
    return ErrorOf(spoilt.dump());
  };
  EXPECT_EQ(refused([](Json& j) {
              j["columns"][4]["parts"] = {4, 3};
            }),
            "columns[4] must be a product of input columns");
  EXPECT_EQ(refused([](Json& j) {
              j["columns"][4]["parts"] = {2, 9};
            }),
            "columns[4] must be a product of input columns");
  EXPECT_EQ(refused([](Json& j) {
              j["columns"][4]["parts"] = {3, 3};
            }),
            "columns[4] must have two parts");
  EXPECT_EQ(refused([](Json& j) { j["columns"][4].erase("parts"); }), "columns[4] lacks parts");
  EXPECT_EQ(refused([](Json& j) {
              j["columns"][4]["parts"] = {3, 2};
            }),
            "terms[5].factors are those of no column");
  EXPECT_EQ(refused([](Json& j) {
              j["terms"][5]["factors"] = {{2, 1}, {3, 0, 0}, {2, 1}};
            }),
            "terms[5].factors are those of no column");
  EXPECT_EQ(refused([](Json& j) { j["basis"].erase("slope"); }), "basis lacks slope");
}

TEST(ModelText, ARefusedModelIsAText) {
  Model model;
  model.reason = "needs 5 rows, has 3";
  model.rows = {.offered = 4, .fitted = 3, .with_gaps = 1};
  const std::string text = ModelText(model);
  const Model back = Read(Json::parse(text));
  EXPECT_TRUE(back.refused());
  EXPECT_EQ(back.reason, model.reason);
  EXPECT_EQ(ModelText(back), text);
}

TEST(ModelText, OtherTextsAreRefusedInWords) {
  EXPECT_EQ(ErrorOf(""), "it is not JSON, at byte 1");
  EXPECT_EQ(ErrorOf("{\"ladderline_model\":1"), "it is not JSON, at byte 22");
  EXPECT_EQ(ErrorOf("{\"ladderline_model\":1}}"), "it is not JSON, at byte 23");
  EXPECT_EQ(ErrorOf("12"), "it must be an object");
  EXPECT_EQ(ErrorOf("{\"a\":1}"), "it lacks ladderline_model");
  EXPECT_EQ(ErrorOf("{\"ladderline_model\":2,\"x\":[]}"),
            "its format has version 2, this build reads version 1");
  EXPECT_EQ(ErrorOf("{\"ladderline_model\":\"1\"}"),
            "its format has version \"1\", this build reads version 1");
  EXPECT_EQ(ErrorOf("{\"ladderline_model\":1,\"ladderline_model\":1}"),
            "the key ladderline_model comes twice in one object");
  EXPECT_EQ(ErrorOf("[[[[[[[[[[[[1]]]]]]]]]]]]"), "it is nested too deeply");
  EXPECT_EQ(ErrorOf(std::string(1000000, '[')), "it is nested too deeply");
  EXPECT_EQ(ErrorOf("{\"ladderline_model\":1,\"level\":1e999}"),
            "it holds a number too large for a double");
  EXPECT_EQ(ErrorOf("{\"name\":\"\xff\"}"), "it is not JSON, at byte 10");
}

// A text with one value changed, and what its reader says.
struct Edit {
  const Json& base;
  const char* pointer;
  Json value;
  const char* error;
};

// [[a, b]]
Json Pair(int a, int b) { return Json::array({Json::array({a, b})}); }

TEST(ModelText, EveryPartIsChecked) {
  const Json sound = Texts()[0];   // volume, girth, height
  const Json mixed = Texts()[2];   // weight of car, cylinders (4, 6, 8; reference 6), power; w
  const Json robust = Texts()[1];  // hc3
  const Json kNull = nullptr;
  const std::vector<Edit> edits = {
      {sound, "/extra", 1, "it has the unknown key extra"},
      {sound, "/columns/1/colour", "red", "columns[1] has the unknown key colour"},
      {sound, "/status", "fine", "status has the unknown word 'fine'"},
      {sound, "/status", "refused", "reason must be given exactly if it is refused"},
      {sound, "/reason", "why", "reason must be given exactly if it is refused"},
      {sound, "/family", "poisson", "family is not known"},
      {sound, "/name", 5, "name must be text"},
      {sound, "/intercept", 1, "intercept must be true or false"},
      {sound, "/intercept", false, "terms[0] lacks factors"},
      {sound, "/errors", "hc9", "errors has the unknown word 'hc9'"},
      {sound, "/errors", "hc3", "basis.robust must be there exactly for robust errors"},
      {sound, "/level", 1, "level must lie between 0 and 1"},
      {sound, "/level", kNull, "level must be a number"},
      {sound, "/rows", 3, "rows must be an object"},
      {sound, "/rows/fitted", 99, "rows must not count more than offered"},
      {sound, "/rows/fitted", -1, "rows.fitted must be a whole number from 0"},
      {sound, "/rows/fitted", 1.5, "rows.fitted must be a whole number from 0"},
      {sound, "/rows/fitted", 18446744073709551615U, "rows.fitted must be a whole number from 0"},
      {sound, "/columns", Json::array(), "columns must not be empty"},
      {sound, "/columns", Json::object(), "columns must be an array"},
      {sound, "/columns/0/role", "predictor",
       "columns[0] must be the response exactly if it is the first"},
      {sound, "/columns/1/role", "response",
       "columns[1] must be the response exactly if it is the first"},
      {sound, "/columns/1/name", "height", "columns[2] repeats the name of another column"},
      {sound, "/columns/1/name", "", "columns[1].name must not be empty"},
      {sound, "/columns/1/kind", "number9", "columns[1].kind has the unknown word 'number9'"},
      {sound, "/columns/1/kind", "text", "columns[1] must be no bare text"},
      {sound, "/columns/1/kind", "polynomial", "columns[1] lacks degree"},
      {sound, "/columns/1/degree", 2, "columns[1].degree must be a whole number in 0..0"},
      {sound, "/columns/1/transform", "box_cox", "columns[1].transform lacks its arguments"},
      {sound, "/columns/1/values", kNull, "columns[1].values must be an array of 7"},
      {sound, "/columns/1/values", {1, 2, 3}, "columns[1].values must be an array of 7"},
      {sound, "/columns/1/values/4", 1, "columns[1].values must not fall"},
      {sound, "/columns/1/values/0", kNull, "columns[1].values must be a number"},
      {sound, "/columns/1/values/6", -1, "columns[1].values must not have a negative sd"},
      {sound, "/columns/1/levels", Json::array({Json::array({"a", 1})}),
       "columns[1].levels belong to a category"},
      {sound, "/columns/1/reference", 0, "columns[1].reference must be a whole number in -1..-1"},
      {mixed, "/columns/2/levels/1/0", "3", "columns[2].levels[1] is out of byte order"},
      {mixed, "/columns/2/levels/1", {"6"}, "columns[2].levels[1] must be an array of 2"},
      {mixed, "/columns/2/reference", 3, "columns[2].reference must be a whole number in -1..2"},
      {mixed, "/columns/2/transform", "square", "columns[2] must have no transform as a category"},
      {sound, "/terms", Json::array(), "terms must be 1 to 1000"},
      {sound, "/terms/1/factors", Pair(0, 1), "terms[1].factors[0] must be a whole number in 1..2"},
      {sound, "/terms/1/factors", Pair(3, 1), "terms[1].factors[0] must be a whole number in 1..2"},
      {sound, "/terms/1/factors", Pair(1, 2), "terms[1].factors[0] must be a whole number in 1..1"},
      {sound, "/terms/1/factors", Json::array({Json::array({1, 0, 0})}),
       "terms[1].factors[0] must be an array of 2"},
      {sound, "/terms/0/factors", Pair(1, 1),
       "terms[0].factors must not be there for the intercept"},
      {sound, "/terms/1/name", "girth of tree", "terms[1] lacks factors"},
      {mixed, "/terms/2/factors/0/2", 3, "terms[2].factors[0] must be a whole number in 0..2"},
      {mixed, "/terms/2/factors/0", {2, 1}, "terms[2].factors[0] must be an array of 3"},
      {mixed, "/terms/1/factors", Pair(4, 1), "terms[1].factors[0] must name an input column"},
      {sound, "/terms/1/coefficient", "1", "terms[1].coefficient must be a number or null"},
      {sound, "/terms/1/hc3", -1, "terms[1].hc3 must not be negative"},
      {sound, "/facts/residual_df", -1, "facts must have whole degrees of freedom"},
      {sound, "/facts/residual_df", 1e300, "facts must have whole degrees of freedom"},
      {sound, "/facts/residual_df", kNull, "facts lacks residual_df"},
      {sound, "/facts/residual_sd", -1, "facts.residual_sd must not be negative"},
      {sound, "/tests", Pair(1, 1), "tests[0] must be an array of 3 or 6"},
      {sound, "/tests", Json::array({Json::array({0, 1, 1})}),
       "tests[0] must be a whole number in 1..2"},
      {sound,
       "/checks",
       {{{"name", "white"}, {"status", "good"}}},
       "checks[0].status has the unknown word 'good'"},
      {sound,
       "/residuals",
       {{"quantiles", {1, 2}}},
       "residuals.quantiles must hold 11 values, has 2"},
      {sound, "/smearing/kind", "points", "smearing.kind does not suit the response's transform"},
      {sound, "/columns/0/transform", "identity",
       "smearing.kind does not suit the response's transform"},
      {sound, "/smearing/values", {1, 2}, "smearing.values must hold 1 values, has 2"},
      {sound, "/smearing/points", {1}, "smearing.points must be text"},
      {sound, "/smearing/points", "ABC", "smearing.points must be packed numbers"},
      {sound, "/smearing/points", PackNumbers(std::vector<double>{1}),
       "smearing.points must be pairs"},
      {sound, "/smearing/points", PackNumbers(std::vector<double>{1, 0}),
       "smearing.points must have weights above 0"},
      {sound, "/residuals/bins", Json::array({Json::array({4, 0.1, 0.2})}),
       "residuals lacks fitted"},
      {sound, "/influence", Json::array({Json::array({true, 1, 1})}),
       "influence[0] must begin with a key: null, a number or text"},
      {sound, "/basis/centre", PackNumbers(std::vector<double>{0, 1}),
       "basis.centre must hold 3 values, has 2"},
      {sound, "/basis/origin", {1}, "basis.origin must hold 2 values, has 1"},
      {sound, "/basis/origin/0", kNull, "basis.origin[0] must be a number"},
      {sound, "/terms/1/coefficient", kNull, "basis.centre must hold 2 values, has 3"},
      {sound, "/basis/slope_low", "", "basis.slope_low must hold 2 values, has 0"},
      {sound, "/basis/factor", "", "basis.factor must hold 6 values, has 0"},
      {sound, "/basis/factor", PackNumbers(std::vector<double>{1, 2, -1, 4, 5, 6}),
       "basis.factor must have a diagonal above 0"},
      {sound, "/basis/factor", PackNumbers(std::vector<double>{1, NAN, 1, 4, 5, 6}),
       "basis.factor must hold finite numbers"},
      {sound, "/basis/factor_low", 1, "basis.factor_low must be text"},
      {robust, "/basis/robust/matrix", "", "basis.robust.matrix must hold 6 values, has 0"},
      {robust, "/basis/robust/scale", -1, "basis.robust.scale must not be negative"},
      {robust,
       "/basis/robust/unknown",
       {"AAAAAAAA8D8="},
       "basis.robust.unknown[0] must hold 3 values"},
      {sound, "/clusters", 1000, "clusters must not be more than rows"},
      {sound, "/clusters", -1, "clusters must be a whole number from 0"},
      {robust, "/errors", "cluster", "clusters must be there for cluster errors"},
      {sound, "/digest", "xyz", "digest must be 32 hexadecimal digits"},
      {sound, "/release_floor", -1, "release_floor must be a whole number from 0"},
      {mixed, "/columns/2/merged", 3, "columns[2].merged must be a whole number in -1..2"},
      {sound, "/terms/1/repeats", Pair(0, 1),
       "terms[1].repeats must be there for a term without a coefficient only"},
  };
  for (const Edit& edit : edits) {
    Json text = edit.base;
    text[Json::json_pointer(edit.pointer)] = edit.value;
    EXPECT_EQ(ErrorOf(text.dump()), edit.error) << edit.pointer << " = " << edit.value;
  }
  for (const char* key : {"status", "family", "rows", "facts", "basis"}) {
    Json text = sound;
    text.erase(key);
    EXPECT_EQ(ErrorOf(text.dump()), std::string("it lacks ") + key);
  }
  Json text = sound;
  text["columns"][1]["transform"] = "sqrt 5";
  EXPECT_EQ(ErrorOf(text.dump()).find("columns[1].transform is no spec: "), 0U);
}

TEST(ModelText, HistogramsAreCheckedWhole) {
  Json sound = Texts()[0];  // 31 rows
  sound["response_histogram"] = {{"original", {{"edges", {0, 1, 2}}, {"rows", {30, 1}}}},
                                 {"scaled", {{"edges", {7, 7}}, {"rows", {31}}}}};
  Read(sound);
  Json many;
  for (int i = 0; i <= 26; ++i) many.push_back(i);
  const std::vector<Edit> edits = {
      {sound, "/response_histogram", 1, "response_histogram must be an object"},
      {sound, "/response_histogram", Json::object(), "response_histogram lacks original"},
      {sound, "/response_histogram/edges", 1, "response_histogram has the unknown key edges"},
      {sound, "/response_histogram/original", Json::object(),
       "response_histogram.original lacks edges"},
      {sound,
       "/response_histogram/original/edges",
       {1},
       "response_histogram.original.edges must hold 2 to 26 values"},
      {sound, "/response_histogram/original/edges", many,
       "response_histogram.original.edges must hold 2 to 26 values"},
      {sound,
       "/response_histogram/original/edges",
       {0, 0, 1},
       "response_histogram.original.edges must rise"},
      {sound,
       "/response_histogram/original/edges",
       {0, nullptr, 1},
       "response_histogram.original.edges[1] must be a number"},
      {sound,
       "/response_histogram/original/rows",
       {30},
       "response_histogram.original.rows must hold 2 values, has 1"},
      {sound,
       "/response_histogram/original/rows",
       {30, 2},
       "response_histogram.original.rows[1] must be a whole number in 0..1"},
      {sound,
       "/response_histogram/original/rows",
       {30, 0},
       "response_histogram.original.rows must add up to rows.fitted"},
      {sound, "/response_histogram/scaled/rows/0", -31,
       "response_histogram.scaled.rows[0] must be a whole number in 0..31"},
  };
  for (const Edit& edit : edits) {
    Json text = edit.base;
    text[Json::json_pointer(edit.pointer)] = edit.value;
    EXPECT_EQ(ErrorOf(text.dump()), edit.error) << edit.pointer << " = " << edit.value;
  }
}

// The fuzz target's own check, on deterministic edits of sound texts: cut, flip, delete, double,
// replace numbers by awkward ones.
TEST(ModelText, EditedTextsAreRefusedOrStandUp) {
  std::mt19937 random(20240613);
  const auto pick = [&](size_t n) { return static_cast<size_t>(random() % n); };
  const std::vector<std::string> awkward = {"0",    "-1",   "null", "1e308", "-1e-320", "2",
                                            "true", "\"\"", "[]",   "{}",    "1e999",   "3.5"};
  std::vector<std::string> seeds;
  for (Json text : Texts()) {
    seeds.push_back(text.dump());
    if (!text.contains("terms")) continue;
    text["response_histogram"] = {
        {"original", {{"edges", {0, 1, 2}}, {"rows", {text["rows"]["fitted"], 0}}}}};
    seeds.push_back(text.dump());
  }
  seeds.push_back(PolynomialAndProduct().dump());
  for (const char* name : {"released", "collinear"})
    seeds.push_back(ReadOrderedJson(std::string("../fuzz/model_text/") + name + ".json").dump());
  for (const std::string& seed : seeds) {
    for (int i = 0; i < 1500; ++i) {
      std::string text = seed;
      switch (pick(5)) {
        case 0:
          text.resize(pick(text.size()));
          break;
        case 1:
          text[pick(text.size())] = static_cast<char>(pick(256));
          break;
        case 2:
          text.erase(pick(text.size()), 1 + pick(40));
          break;
        case 3: {
          const size_t at = pick(text.size());
          text.insert(at, text.substr(pick(text.size()), pick(40)));
          break;
        }
        default: {
          const size_t begin = text.find_first_of("-0123456789", pick(text.size()));
          if (begin == std::string::npos) break;
          size_t end = text.find_first_not_of("-+.e0123456789", begin);
          if (end == std::string::npos) end = text.size();
          text.replace(begin, end - begin, awkward[pick(awkward.size())]);
        }
      }
      LLVMFuzzerTestOneInput(reinterpret_cast<const std::uint8_t*>(text.data()), text.size());
    }
  }
}

}  // namespace
}  // namespace ladderline::testing
