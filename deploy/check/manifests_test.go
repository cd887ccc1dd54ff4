package check

import (
	"fmt"
	"reflect"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"

	monitoring "github.com/prometheus-operator/prometheus-operator/pkg/apis/monitoring/v1"
	core "k8s.io/api/core/v1"
	meta "k8s.io/apimachinery/pkg/apis/meta/v1"
	"k8s.io/apimachinery/pkg/labels"
	"k8s.io/apimachinery/pkg/util/intstr"
	security "k8s.io/pod-security-admission/api"
	"k8s.io/pod-security-admission/policy"
	"sigs.k8s.io/yaml"
)

// The pod is admitted where the strictest of the Pod Security Standards is enforced, by the code that enforces it, and goes
// further than that: no right to write, no identity, no variables of neighbours.
func TestPodIsRestricted(t *testing.T) {
	evaluator, err := policy.NewEvaluator(policy.DefaultChecks(), nil)
	if err != nil {
		t.Fatal(err)
	}
	eachFolder(t, func(t *testing.T, m *manifests) {
		_, spec := m.pod()
		level := security.LevelVersion{Level: security.LevelRestricted, Version: security.LatestVersion()}
		for _, result := range evaluator.EvaluatePod(level, &m.deployment.Spec.Template.ObjectMeta, spec) {
			if !result.Allowed {
				t.Errorf("%s: %s", result.ForbiddenReason, result.ForbiddenDetail)
			}
		}
		if c := m.container().SecurityContext; c == nil || c.ReadOnlyRootFilesystem == nil || !*c.ReadOnlyRootFilesystem {
			t.Error("the root file system is writable")
		}
		if spec.AutomountServiceAccountToken == nil || *spec.AutomountServiceAccountToken ||
			m.serviceAccount.AutomountServiceAccountToken == nil || *m.serviceAccount.AutomountServiceAccountToken {
			t.Error("the pod gets a token of the cluster")
		}
		if spec.ServiceAccountName != m.serviceAccount.Name {
			t.Errorf("the pod runs as %q", spec.ServiceAccountName)
		}
		if spec.EnableServiceLinks == nil || *spec.EnableServiceLinks {
			t.Error("neighbours' variables can pass for flags")
		}
	})
}

// selects reports whether a selector matches labels.
func selects(t *testing.T, s *meta.LabelSelector, of map[string]string) bool {
	t.Helper()
	selector, err := meta.LabelSelectorAsSelector(s)
	if err != nil {
		t.Fatal(err)
	}
	return !selector.Empty() && selector.Matches(labels.Set(of))
}

// What points at the pods finds them.
func TestSelectors(t *testing.T) {
	eachFolder(t, func(t *testing.T, m *manifests) {
		pod, spec := m.pod()
		for what, selector := range map[string]*meta.LabelSelector{
			"deployment": m.deployment.Spec.Selector, "budget": m.budget.Spec.Selector, "network policy": &m.networkPolicy.Spec.PodSelector,
		} {
			if !selects(t, selector, pod) {
				t.Errorf("the selector of the %s does not match %v", what, pod)
			}
		}
		for _, s := range m.services {
			if !selects(t, &meta.LabelSelector{MatchLabels: s.Spec.Selector}, pod) {
				t.Errorf("the selector of service %s does not match %v", s.Name, pod)
			}
		}
		for _, c := range spec.TopologySpreadConstraints {
			if !selects(t, c.LabelSelector, pod) {
				t.Errorf("the spread over %s does not match %v", c.TopologyKey, pod)
			}
		}
		if ref := m.autoscaler.Spec.ScaleTargetRef; ref.Kind != m.deployment.Kind || ref.APIVersion != m.deployment.APIVersion || ref.Name != m.deployment.Name {
			t.Errorf("the autoscaler scales %+v", ref)
		}
		if m.deployment.Spec.Replicas != nil {
			t.Error("the deployment would set back the number of replicas at each apply")
		}
		if lowest := m.autoscaler.Spec.MinReplicas; lowest == nil || *lowest < 2 {
			t.Error("one replica alone cannot be replaced without a gap")
		}
	})
}

// port reports whether the container has a port of that name.
func (m *manifests) port(name string) (number int32, ok bool) {
	for _, p := range m.container().Ports {
		if p.Name == name {
			return p.ContainerPort, true
		}
	}
	return 0, false
}

// Ports are named once, in the container, and all others use those names; the service listens on their numbers.
func TestPorts(t *testing.T) {
	eachFolder(t, func(t *testing.T, m *manifests) {
		known := func(what string, port intstr.IntOrString, names ...string) {
			t.Helper()
			if _, ok := m.port(port.StrVal); !ok || !slices.Contains(names, port.StrVal) {
				t.Errorf("%s uses port %q, not one of %v", what, port.String(), names)
			}
		}
		for name, variable := range map[string]string{"http": "DEWMARK_LISTEN", "admin": "DEWMARK_ADMIN_LISTEN"} {
			if number, ok := m.port(name); !ok || !strings.HasSuffix(m.variable(t, variable), ":"+strconv.Itoa(int(number))) {
				t.Errorf("%s is %q, the port %s is %d", variable, m.variable(t, variable), name, number)
			}
		}
		c := m.container()
		for what, probe := range map[string]*core.Probe{"startup": c.StartupProbe, "liveness": c.LivenessProbe, "readiness": c.ReadinessProbe} {
			if probe == nil || probe.HTTPGet == nil {
				t.Fatalf("there is no %s probe", what)
			}
			known(what+" probe", probe.HTTPGet.Port, "http")
			if want := map[bool]string{true: "/readyz", false: "/livez"}[what == "readiness"]; probe.HTTPGet.Path != want {
				t.Errorf("the %s probe asks %s", what, probe.HTTPGet.Path)
			}
		}
		admin := 0
		for _, s := range m.services {
			for _, p := range s.Spec.Ports {
				known("service "+s.Name, p.TargetPort, "http", "admin")
				if p.TargetPort.StrVal == "admin" {
					admin++
					if len(s.Spec.Ports) != 1 || s.Spec.ClusterIP != core.ClusterIPNone {
						t.Errorf("service %s shows the profiler to clients", s.Name)
					}
				}
			}
		}
		if admin != 1 {
			t.Errorf("%d services lead to the metrics", admin)
		}
		for _, rule := range m.networkPolicy.Spec.Ingress {
			if len(rule.From) == 0 || len(rule.Ports) == 0 {
				t.Error("a rule of the network policy lets everybody in, or into everything")
			}
			for _, p := range rule.Ports {
				known("network policy", *p.Port, "http", "admin")
			}
			for _, from := range rule.From {
				if from.PodSelector != nil && from.PodSelector.MatchLabels["app.kubernetes.io/name"] != "" {
					t.Error("the network policy lets in none but the service itself")
				}
			}
		}
	})
}

// The end of a pod leaves time for all of it, and the service goes on until the proxies know.
func TestTimeToEnd(t *testing.T) {
	eachFolder(t, func(t *testing.T, m *manifests) {
		_, spec := m.pod()
		drain, err := time.ParseDuration(m.variable(t, "DEWMARK_DRAIN"))
		if err != nil {
			t.Fatal(err)
		}
		delay, err := time.ParseDuration(m.variable(t, "DEWMARK_DRAIN_DELAY"))
		if err != nil {
			t.Fatal(err)
		}
		if grace := *spec.TerminationGracePeriodSeconds; float64(grace) < (delay+drain).Seconds()+5 {
			t.Errorf("a pod has %d s to end, of which it may use %v and %v", grace, delay, drain)
		}
		if delay < time.Second {
			t.Error("a pod ends before the proxies know")
		}
		if u := m.deployment.Spec.Strategy.RollingUpdate; u == nil || u.MaxUnavailable.IntValue() != 0 || u.MaxSurge.IntValue() < 1 {
			t.Errorf("an upgrade takes a pod away before the next one is ready: %+v", u)
		}
	})
}

// The soft limit of the Go runtime lies below the limit of the container, by less than a tenth, whatever an overlay makes
// of that.
func TestMemoryLimit(t *testing.T) {
	eachFolder(t, func(t *testing.T, m *manifests) {
		var mebibytes int64
		limit := m.container().Resources.Limits.Memory().Value()
		for _, v := range m.container().Env {
			if v.Name == "MEMORY_LIMIT_MEBIBYTES" {
				divisor := v.ValueFrom.ResourceFieldRef.Divisor.Value()
				mebibytes = (limit + divisor - 1) / divisor // as the kubelet rounds
			}
		}
		text := strings.Replace(m.variable(t, "GOMEMLIMIT"), "$(MEMORY_LIMIT_MEBIBYTES)", strconv.FormatInt(mebibytes, 10), 1)
		soft, err := strconv.ParseInt(text, 10, 64)
		if err != nil || soft >= limit || float64(soft) < 0.9*float64(limit) {
			t.Errorf("GOMEMLIMIT is %q of %d bytes, %v", text, limit, err)
		}
	})
}

// An overlay runs a release, in a namespace that enforces what the pod fulfils.
func TestOverlay(t *testing.T) {
	for _, folder := range folders(t)[1:] {
		m := build(t, folder)
		if _, tag, ok := strings.Cut(m.container().Image, ":"); !ok || tag == "latest" {
			t.Errorf("%s runs the image %q", folder, m.container().Image)
		}
		if m.namespace == nil || m.namespace.Labels["pod-security.kubernetes.io/enforce"] != "restricted" || m.namespace.Name != m.deployment.Namespace {
			t.Errorf("%s: namespace %+v", folder, m.namespace)
		}
	}
}

// The service monitor finds the service, and the series get the job that the rules ask for.
func TestServiceMonitor(t *testing.T) {
	m := build(t, "../kubernetes/overlays/production")
	if m.serviceMonitor == nil {
		t.Fatal("there is no service monitor")
	}
	var found []*core.Service
	for _, s := range m.services {
		if selects(t, &m.serviceMonitor.Spec.Selector, s.Labels) {
			found = append(found, s)
		}
	}
	if len(found) != 1 || len(m.serviceMonitor.Spec.Endpoints) != 1 {
		t.Fatalf("the service monitor matches %d services", len(found))
	}
	if e := m.serviceMonitor.Spec.Endpoints[0]; e.Port != found[0].Spec.Ports[0].Name || e.Path != "/metrics" {
		t.Errorf("the service monitor reads %s at port %s", e.Path, e.Port)
	}
	if job := found[0].Labels[m.serviceMonitor.Spec.JobLabel]; job != "dewmark" {
		t.Errorf("the job is %q", job)
	}
}

// The rules for the Prometheus operator are those of deploy/prometheus, which promtool tests.
func TestPrometheusRule(t *testing.T) {
	m := build(t, "../kubernetes/overlays/production")
	if m.rules == nil {
		t.Fatal("there are no rules")
	}
	var want []monitoring.RuleGroup
	for _, name := range []string{"recording.yaml", "alerts.yaml"} {
		var file monitoring.PrometheusRuleSpec
		if err := yaml.UnmarshalStrict(read(t, "../prometheus/"+name), &file); err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		want = append(want, file.Groups...)
	}
	if len(want) == 0 || !reflect.DeepEqual(m.rules.Spec.Groups, want) {
		t.Errorf("kubernetes/monitoring/prometheusrule.yaml differs from deploy/prometheus; write it anew with deploy/prometheus/check --write (%s)", difference(m.rules.Spec.Groups, want))
	}
}

// difference names the first groups that differ.
func difference(got, want []monitoring.RuleGroup) string {
	for i := range max(len(got), len(want)) {
		if i >= len(got) || i >= len(want) || !reflect.DeepEqual(got[i], want[i]) {
			return fmt.Sprintf("group %d", i)
		}
	}
	return "none"
}
