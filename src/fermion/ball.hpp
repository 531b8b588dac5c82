#pragma once

#include <arb.h>

/// Balls [mid +- radius] that hold every rounding.
namespace chainmark::fermion {

/// A real number known to lie in a ball. Arithmetic is rounded to `Ball::bits` of precision, one
/// for the thread.
class Ball {
public:
    Ball() { arb_init(x_); }
    Ball(double exact) : Ball() { arb_set_d(x_, exact); }  // NOLINT: as numbers do
    Ball(const Ball& other) : Ball() { arb_set(x_, other.x_); }
    Ball(Ball&& other) noexcept : Ball() { arb_swap(x_, other.x_); }
    Ball& operator=(Ball other) {
        arb_swap(x_, other.x_);
        return *this;
    }
    ~Ball() { arb_clear(x_); }

    static thread_local slong bits;

    arb_ptr get() { return x_; }
    arb_srcptr get() const { return x_; }

    Ball& operator+=(const Ball& b) {
        arb_add(x_, x_, b.x_, bits);
        return *this;
    }
    Ball& operator-=(const Ball& b) {
        arb_sub(x_, x_, b.x_, bits);
        return *this;
    }

    friend Ball operator+(Ball a, const Ball& b) { return a += b; }
    friend Ball operator-(Ball a, const Ball& b) { return a -= b; }
    friend Ball operator*(const Ball& a, const Ball& b) {
        Ball c;
        arb_mul(c.x_, a.x_, b.x_, bits);
        return c;
    }
    friend Ball operator/(const Ball& a, const Ball& b) {
        Ball c;
        arb_div(c.x_, a.x_, b.x_, bits);
        return c;
    }
    Ball operator-() const {
        Ball c;
        arb_neg(c.x_, x_);
        return c;
    }

    bool is_zero() const { return arb_is_zero(x_) != 0; }
    bool contains_zero() const { return arb_contains_zero(x_) != 0; }
    bool is_positive() const { return arb_is_positive(x_) != 0; }
    bool is_negative() const { return arb_is_negative(x_) != 0; }

private:
    arb_t x_;
};

inline thread_local slong Ball::bits = 128;

/// Certainly a < b, all numbers of both balls.
inline bool surely_less(const Ball& a, const Ball& b) {
    return arb_lt(a.get(), b.get()) != 0;
}

inline Ball absolute(const Ball& a) {
    Ball c;
    arb_abs(c.get(), a.get());
    return c;
}

inline Ball smaller(const Ball& a, const Ball& b) {
    Ball c;
    arb_min(c.get(), a.get(), b.get(), Ball::bits);
    return c;
}

inline Ball larger(const Ball& a, const Ball& b) {
    Ball c;
    arb_max(c.get(), a.get(), b.get(), Ball::bits);
    return c;
}

/// sqrt(a^2 + b^2)
inline Ball length_of(const Ball& a, const Ball& b) {
    Ball c = a * a + b * b;
    arb_sqrtpos(c.get(), c.get(), Ball::bits);
    return c;
}

/// cos(pi p/q) and sin(pi p/q), the fraction reduced exactly.
inline Ball cos_pi_ball(slong p, slong q) {
    Ball c;
    fmpq_t x;
    fmpq_init(x);
    fmpq_set_si(x, p, static_cast<ulong>(q));
    arb_cos_pi_fmpq(c.get(), x, Ball::bits);
    fmpq_clear(x);
    return c;
}

inline Ball sin_pi_ball(slong p, slong q) {
    return cos_pi_ball(2 * p - q, 2 * q);  // cos(x - pi/2)
}

}  // namespace chainmark::fermion
