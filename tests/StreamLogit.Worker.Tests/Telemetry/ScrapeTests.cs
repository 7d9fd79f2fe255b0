using System.Net;
using System.Net.Http.Headers;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Telemetry;

/// <summary>What a running worker answers to machines.</summary>
public sealed class ScrapeTests : IDisposable
{
    private const string Key = "a-key-that-nobody-guesses";

    private readonly ServedStream _stream = ServedStream.OfFerryTickets(key: Key);
    private readonly HttpClient _client = new() { Timeout = StreamLogitProcess.Patience };

    public void Dispose()
    {
        _client.Dispose();
        _stream.Dispose();
    }

    [Fact]
    public async Task Scrape_RunningWorker_IsOpenMetricsThatThePageDescribes()
    {
        await ScoredAsync();
        using var response = await GetAsync("/metrics", "application/openmetrics-text; version=1.0.0", Key);

        Assert.Equal("application/openmetrics-text", response.Content.Headers.ContentType!.MediaType);
        var metrics = OpenMetricsText.Parse(await response.Content.ReadAsStringAsync(TestContext.Current.CancellationToken));

        Assert.Equal(12_000, metrics.ValueOf("streamlogit_records_total"));
        Assert.Equal(12_000, metrics.ValueOf("messaging_client_consumed_messages_total"));
        Assert.InRange(metrics.ValueOf("streamlogit_events_total"), 5_000, 7_000);
        Assert.InRange(metrics.Samples.Single(s => s.Name == "streamlogit_log_loss" && s.Labels["streamlogit_window"] == "all").Value, 0.01, 1);
        Assert.Contains(metrics.Samples, s => s.Name == "streamlogit_latency_seconds_count" && s.Value > 0);

        // Everything is in the page, with its attributes.
        var rows = InstrumentTable.Rows.ToDictionary(row => Plain(row.Name));
        var own = metrics.Samples.Where(s => s.Family.StartsWith("streamlogit_", StringComparison.Ordinal) || s.Family.StartsWith("messaging_", StringComparison.Ordinal)).ToList();
        Assert.True(own.Select(s => s.Family).Distinct().Count() > 30);
        Assert.All(own, sample =>
        {
            var row = rows[WithoutUnit(sample.Family, rows)];
            string[] known = [.. row.Attributes.Select(Plain), "otel_scope_name", "le"];
            Assert.All(sample.Labels.Keys, label => Assert.Contains(label, known));
            Assert.Equal(row.Kind switch { "up-down counter" => "gauge", var kind => kind }, metrics.Families[sample.Family]);
        });
    }

    [Fact]
    public async Task Scrape_WhoDoesNotAskForOpenMetrics_GetsPlainText()
    {
        using var response = await GetAsync("/metrics", "text/plain", Key);
        Assert.Equal(("text/plain", HttpStatusCode.OK), (response.Content.Headers.ContentType!.MediaType, response.StatusCode));
    }

    [Fact]
    public async Task Scrape_WithoutTheKey_IsRefused()
    {
        using var response = await GetAsync("/metrics", "text/plain", key: null);
        Assert.Equal(HttpStatusCode.Unauthorized, response.StatusCode);
    }

    [Theory]
    [InlineData("/live")]
    [InlineData("/ready")]
    public async Task Probe_WithoutKeyAndByAnyName_IsHealthy(string path)
    {
        await ScoredAsync();
        using var response = await GetAsync(path, "*/*", key: null, host: "10.1.2.3");
        Assert.Equal((HttpStatusCode.OK, "Healthy"), (response.StatusCode, await response.Content.ReadAsStringAsync(TestContext.Current.CancellationToken)));
    }

    private async Task<HttpResponseMessage> GetAsync(string path, string accept, string? key, string? host = null)
    {
        using var request = new HttpRequestMessage(HttpMethod.Get, _stream.Address + path);
        request.Headers.TryAddWithoutValidation("Accept", accept);
        if (key is not null) request.Headers.Authorization = new AuthenticationHeaderValue("Bearer", key);
        if (host is not null) request.Headers.Host = host;
        return await _client.SendAsync(request, TestContext.Current.CancellationToken);
    }

    /// <summary>Waits until the worker has scored what there is.</summary>
    private async Task ScoredAsync()
    {
        for (int attempt = 0; attempt < 1000; attempt++)
        {
            using var response = await GetAsync("/metrics", "application/openmetrics-text; version=1.0.0", Key);
            string text = await response.Content.ReadAsStringAsync(TestContext.Current.CancellationToken);
            if (text.Contains("streamlogit_records_total", StringComparison.Ordinal) && text.Split('\n').Any(line => line.StartsWith("streamlogit_records_total", StringComparison.Ordinal) && line.EndsWith(" 12000", StringComparison.Ordinal))) return;
            await Task.Delay(50, TestContext.Current.CancellationToken);
        }
        throw new TimeoutException("The worker did not score 12,000 records.");
    }

    private static string Plain(string name) => name.Replace('.', '_');

    private static string WithoutUnit<T>(string family, Dictionary<string, T> rows)
    {
        if (rows.ContainsKey(family)) return family;
        foreach (string unit in new[] { "_seconds", "_bytes", "_ratio" })
            if (family.EndsWith(unit, StringComparison.Ordinal) && rows.ContainsKey(family[..^unit.Length])) return family[..^unit.Length];
        return family;
    }
}
