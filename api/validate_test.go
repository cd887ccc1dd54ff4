package api

import (
	"errors"
	"slices"
	"strings"
	"testing"
)

type ruledPart struct {
	Kind string `json:"kind" validate:"omitempty,oneof=red green"`
}

type ruledItem struct {
	ID   string      `json:"id" validate:"required,max=3"`
	Part *ruledPart  `json:"part"`
	List []ruledPart `json:"list" validate:"max=1"`
}

type ruledRequest struct {
	ruledPart

	Step    *float64    `json:"step" validate:"required,gt=0"`
	Many    []float64   `json:"many" validate:"required,min=2,max=3"`
	Nothing []string    `json:"nothing" validate:"max=1"`
	Whole   substance   `json:"whole" validate:"required"`
	Items   []ruledItem `json:"items"`
}

func TestValidate(t *testing.T) {
	good := func() *ruledRequest {
		return &ruledRequest{
			ruledPart: ruledPart{"green"}, Step: new(0.5), Many: []float64{0, 0}, Whole: substance{designation: "R290"},
			Items: []ruledItem{{ID: "äöü"}, {ID: "b", Part: &ruledPart{}, List: []ruledPart{{"red"}}}},
		}
	}
	for _, tt := range []struct {
		name   string
		change func(r *ruledRequest)
		want   []string // pointer and code of each fault
	}{
		{"good", func(*ruledRequest) {}, nil},
		{"nothing", func(r *ruledRequest) { *r = ruledRequest{} }, []string{"#/step missing", "#/many missing", "#/whole missing"}},
		{"zero is there but not greater", func(r *ruledRequest) { r.Step = new(0.0) }, []string{"#/step out_of_range"}},
		{"empty is there but too few", func(r *ruledRequest) { r.Many = []float64{} }, []string{"#/many too_few"}},
		{"many", func(r *ruledRequest) { r.Many = make([]float64, 4) }, []string{"#/many too_many"}},
		{"part of the request", func(r *ruledRequest) { r.Kind = "blue" }, []string{"#/kind not_allowed"}},
		{"two of an item", func(r *ruledRequest) { r.Items[1] = ruledItem{Part: &ruledPart{"blue"}} }, []string{"#/items/1/id missing", "#/items/1/part/kind not_allowed"}},
		{"characters", func(r *ruledRequest) { r.Items[0].ID = "äöüß" }, []string{"#/items/0/id too_long"}},
		{"list of an item", func(r *ruledRequest) { r.Items[1].List[0].Kind = "re" }, []string{"#/items/1/list/0/kind not_allowed"}},
		{"not below a fault", func(r *ruledRequest) { r.Items[1].List = make([]ruledPart, 2); r.Items[1].List[0].Kind = "blue" }, []string{"#/items/1/list too_many"}},
	} {
		r := good()
		tt.change(r)
		var got []string
		if p, ok := errors.AsType[*Problem](validate(r)); ok {
			for _, f := range p.Errors {
				got = append(got, f.Pointer+" "+f.Code)
			}
		}
		if !slices.Equal(got, tt.want) {
			t.Errorf("%s: %v, want %v", tt.name, got, tt.want)
		}
	}
	defer func() {
		if text, _ := recover().(string); !strings.Contains(text, "requird") {
			t.Errorf("a misspelt rule: %q", text)
		}
	}()
	_ = validate(&struct {
		A string `validate:"requird"`
	}{})
}

// What is in a list is held against its rules as what is not.
func TestRulesOfItems(t *testing.T) {
	body := `{"machine": {"refrigerant": "R290", "compressor": {}, "evaporator": {}, "condenser": {}}, "conditions": [{"id": "` + strings.Repeat("x", 129) + `"}]}`
	a := testAPI(t)
	answer := do(t, a.Handler(), "POST", "/v1/operating-points", body)
	if answer.Code != 422 || !strings.Contains(answer.Body.String(), `"#/conditions/0/id"`) || !strings.Contains(answer.Body.String(), `"too_long"`) {
		t.Errorf("%d %s", answer.Code, answer.Body)
	}
}
