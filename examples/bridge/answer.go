package main

import (
	"context"
	"errors"

	"example.org/closedform/expr"
	"example.org/closedform/linsys"
)

// answer derives the response that a request asks for.
func answer(ctx context.Context, req request) (object, error) {
	m, err := linsys.Read(req.model)
	if err != nil {
		return nil, err
	}
	if m, err = m.Assume(req.assume...); err != nil {
		var e *expr.Error
		if errors.As(err, &e) {
			// Its place is in the assumption, not in the model.
			return nil, expr.Errorf(e.Kind, expr.Pos{}, "in the assumptions: %s", e.Message)
		}
		return nil, err
	}
	r, err := m.ClosedForm(ctx)
	if err != nil {
		return nil, err
	}
	valued, err := r.Substitute(ctx, req.set)
	if err != nil {
		return nil, err
	}
	var o object
	o.add("states", r.States())
	var parts []object
	for _, of := range []func(string) expr.Function{r.State, r.Steady, r.Transient} {
		written, err := forms(ctx, req, r, of)
		if err != nil {
			return nil, err
		}
		parts = append(parts, written)
	}
	o.add("solution", parts[0])
	if req.want["go"] {
		src, err := r.GoSource(ctx, linsys.GoOptions{})
		if err != nil {
			return nil, err
		}
		o.add("go", string(src))
	}
	o.add("steady", parts[1])
	o.add("transient", parts[2])
	if req.want["modes"] {
		list, err := modes(ctx, r.Modes(), req.digits)
		if err != nil {
			return nil, err
		}
		o.add("modes", list)
	}
	if req.want["working"] {
		steps, err := r.Working(ctx)
		if err != nil {
			return nil, err
		}
		o.add("working", working(steps))
	}
	if req.at != nil {
		list, err := values(ctx, valued, req)
		if err != nil {
			return nil, err
		}
		o.add("values", list)
	}
	p := r.Proof()
	o.add("proof", object{{"residual", p.Residual()}, {"sides", p.Side()}, {"holds", p.Holds()}})
	ofModel, ofFormulas, err := r.Conditions(ctx)
	if err != nil {
		return nil, err
	}
	o.add("conditions", append(append([]string{}, ofModel...), ofFormulas...))
	if remarks := r.Remarks(); len(remarks) > 0 {
		o.add("remarks", remarks)
	}
	return o, nil
}

// forms returns the written forms asked for of every state's function.
func forms(ctx context.Context, req request, r *linsys.Response, of func(state string) expr.Function) (object, error) {
	out := object{}
	for _, name := range r.States() {
		n, err := inForm(ctx, of(name), req.form)
		if err != nil {
			return nil, err
		}
		o := object{}
		if req.want["text"] {
			o.add("text", n.String())
		}
		if req.want["latex"] {
			o.add("latex", expr.LaTeX(n))
		}
		if req.want["mathml"] {
			o.add("mathml", expr.MathML(n))
		}
		out.add(name, o)
	}
	return out, nil
}

// inForm writes a function in a form; one that is too long to be written exactly
// is named so.
func inForm(ctx context.Context, f expr.Function, form expr.Form) (expr.Node, error) {
	if form.Numbers == expr.ExactNumbers && !form.Amplitude && !form.SteadyLast {
		return f.Node(), nil
	}
	return f.Write(ctx, form)
}

// working returns the steps of the derivation in every form.
func working(steps []linsys.Step) []object {
	out := []object{}
	for _, s := range steps {
		out = append(out, object{
			{"kind", s.Kind}, {"title", s.Title}, {"text", s.String()}, {"latex", s.LaTeX()}, {"html", s.HTML()},
			{"verified", append([]string{}, s.Verified...)},
		})
	}
	return out
}

// values returns the values of the states at the times asked for. The time has
// the key t, or the name of the independent variable where a state is called t.
func values(ctx context.Context, r *linsys.Response, req request) ([]object, error) {
	key := "t"
	for _, name := range r.States() {
		if name == key {
			key = r.Model().Variable()
		}
	}
	out := []object{}
	for _, m := range req.at {
		o := object{{key, m.text}}
		v, err := r.At(ctx, m.time, req.digits)
		if err != nil {
			return nil, err
		}
		for i, name := range r.States() {
			o.add(name, v[i])
		}
		out = append(out, o)
	}
	return out, nil
}
