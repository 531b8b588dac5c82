#include "chainmark/fermion/routes.hpp"

#include "chainmark/dense/route.hpp"
#include "chainmark/plan/plan.hpp"
#include "chainmark/sector/route.hpp"

namespace chainmark {

std::span<const Route> routes() {
    static const std::vector<Route> all = {
        sector_route(), dense_route(), fermion_route(), limit_route()};
    return all;
}

}  // namespace chainmark
