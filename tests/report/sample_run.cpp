#include "report/sample_run.hpp"

namespace chainmark::test {

SampleRun sample_run(const std::vector<double>& sizes, const std::vector<std::string>& quantities) {
    SampleRun run;
    run.source = std::make_shared<Case>();
    Case& c = *run.source;
    c.source = "invented-ring.toml";
    c.name = "invented-ring";
    c.title = "An invented ring";
    c.family = find_family("xx");
    c.axes = {{"sites", sizes, {}}, {"J", {1.0}, {}}, {"h", {0.0, 0.5}, {}}};
    c.effective = "format = 1\n";
    for (const std::string& name : quantities) {
        c.quantities.push_back({{find_quantity(name), {}, name}, {}, {}});
    }
    run.report.provenance.version = "0.0.0";
    run.report.provenance.command_line = "chainmark run invented-ring.toml";
    run.report.provenance.wall_seconds = 1.25;
    run.report.cases.push_back({&c, Verdict::agree, {}, {}, 2 * sizes.size()});
    return run;
}

Reference reference(RouteId route, Value value, double bound, Basis basis) {
    Reference made;
    made.bound.assign(value.data.size(), bound);
    made.value = std::move(value);
    made.basis = basis;
    made.route = route;
    made.degeneracy = 1;
    return made;
}

QuantityResult& add_point(SampleRun& run,
                          double sites,
                          double h,
                          std::size_t index,
                          std::vector<Reference> references,
                          Verdict verdict) {
    QuantityResult result;
    result.quantity = &run.source->quantities.at(index);
    result.references = std::move(references);
    result.comparison.verdict = verdict;
    run.result().verdict = worse(run.result().verdict, verdict);
    run.result().points.push_back({{{"sites", sites}, {"J", 1.0}, {"h", h}}, {std::move(result)}});
    return run.result().points.back().quantities.back();
}

}  // namespace chainmark::test
