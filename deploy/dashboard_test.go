package deploy_test

import (
	"encoding/json"
	"strings"
	"testing"
)

// panel is a part of a dashboard.
type panel struct {
	ID      int    `json:"id"`
	Type    string `json:"type"`
	Title   string `json:"title"`
	GridPos struct {
		X, Y, W, H int
	} `json:"gridPos"`
	FieldConfig struct {
		Defaults struct {
			Unit string `json:"unit"`
		} `json:"defaults"`
	} `json:"fieldConfig"`
	Options struct {
		YAxis struct {
			Unit string `json:"unit"`
		} `json:"yAxis"`
	} `json:"options"`
	Targets []struct {
		Expr string `json:"expr"`
	} `json:"targets"`
}

func (p *panel) overlaps(q *panel) bool {
	a, b := p.GridPos, q.GridPos
	return a.X < b.X+b.W && b.X < a.X+a.W && a.Y < b.Y+b.H && b.Y < a.Y+a.H
}

// The dashboard asks only for what the service exposes, shows each panel in a place of its own, and names units.
func TestDashboard(t *testing.T) {
	var d struct {
		UID         string  `json:"uid"`
		Panels      []panel `json:"panels"`
		Annotations struct {
			List []struct{ Expr string } `json:"list"`
		} `json:"annotations"`
		Templating struct {
			List []struct{ Name, Type, Definition string } `json:"list"`
		} `json:"templating"`
	}
	if err := json.Unmarshal(read(t, "grafana/dewmark.json"), &d); err != nil {
		t.Fatal(err)
	}
	s := exposed(t)
	check := func(where, expr string) {
		t.Helper()
		if err := s.check(expr); err != nil {
			t.Errorf("%s: %v", where, err)
		}
		for _, variable := range []string{"namespace", "instance"} {
			if !strings.Contains(expr, variable+`=~"$`+variable+`"`) {
				t.Errorf("%s does not heed the choice of %s: %s", where, variable, expr)
			}
		}
	}
	ids := map[int]bool{}
	for i := range d.Panels {
		p := &d.Panels[i]
		if ids[p.ID] || p.Title == "" {
			t.Errorf("panel %d, %q: the number comes twice or the title is missing", p.ID, p.Title)
		}
		ids[p.ID] = true
		if g := p.GridPos; g.W < 1 || g.H < 1 || g.X < 0 || g.X+g.W > 24 {
			t.Errorf("%s lies outside the 24 columns", p.Title)
		}
		for k := range i {
			if p.overlaps(&d.Panels[k]) {
				t.Errorf("%s lies over %s", p.Title, d.Panels[k].Title)
			}
		}
		if p.Type == "row" {
			continue
		}
		if len(p.Targets) == 0 || p.FieldConfig.Defaults.Unit == "" && p.Options.YAxis.Unit == "" {
			t.Errorf("%s shows nothing, or without a unit", p.Title)
		}
		for _, target := range p.Targets {
			check(p.Title, target.Expr)
		}
	}
	if len(ids) < 10 || d.UID == "" {
		t.Errorf("%d panels", len(ids))
	}
	for _, a := range d.Annotations.List {
		check("annotation", a.Expr)
	}
	for _, v := range d.Templating.List {
		if v.Type != "query" {
			continue
		}
		query, label, ok := cutLast(strings.TrimSuffix(strings.TrimPrefix(v.Definition, "label_values("), ")"), ",")
		if err := s.check(query); err != nil || !ok {
			t.Errorf("variable %s: %v", v.Name, err)
		}
		asked, _ := dissect(query)
		if _, ok := s[asked[0].name][strings.TrimSpace(label)]; !ok {
			t.Errorf("variable %s: %s has no label %s", v.Name, asked[0].name, label)
		}
	}
}

// cutLast slices s around the last separator.
func cutLast(s, separator string) (before, after string, found bool) {
	i := strings.LastIndex(s, separator)
	if i < 0 {
		return s, "", false
	}
	return s[:i], s[i+len(separator):], true
}
