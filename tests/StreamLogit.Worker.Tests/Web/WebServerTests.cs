using System.Net;
using System.Net.Http.Headers;
using System.Text.Json;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Web;

/// <summary>What the worker's web server lets pass and what it refuses.</summary>
public sealed class WebServerTests(WebServerTests.Server server) : IClassFixture<WebServerTests.Server>
{
    private const string Key = "a-key-that-nobody-guesses";

    private static CancellationToken Cancellation => TestContext.Current.CancellationToken;

    [Theory]
    [InlineData("evil.example", HttpStatusCode.MisdirectedRequest)]
    [InlineData("127.0.0.1.evil.example", HttpStatusCode.MisdirectedRequest)]
    [InlineData("127.0.0.2", HttpStatusCode.MisdirectedRequest)]
    [InlineData("[::1]", HttpStatusCode.MisdirectedRequest)]
    [InlineData("localhost", HttpStatusCode.OK)]
    [InlineData("LOCALHOST:9", HttpStatusCode.OK)]
    [InlineData("127.0.0.1", HttpStatusCode.OK)]
    public async Task Host_OtherThanTheAddress_IsRefused(string host, HttpStatusCode expected)
    {
        using var answer = await server.GetAsync("/data/view", request => request.Headers.Host = host);

        Assert.Equal(expected, answer.StatusCode);
    }

    [Theory]
    [InlineData("/")]
    [InlineData("/login")]
    [InlineData("/assets/page.js")]
    [InlineData("/data/view")]
    [InlineData("/nothing-here")]
    [InlineData("/data/tables/nothing.csv")]
    public async Task Answer_Any_HasTheSecurityHeaders(string path)
    {
        using var answer = await server.GetAsync(path);

        string policy = Assert.Single(answer.Headers.GetValues("Content-Security-Policy"));
        Assert.Contains("default-src 'none'", policy, StringComparison.Ordinal);
        Assert.DoesNotContain("unsafe", policy, StringComparison.Ordinal);
        Assert.Equal("nosniff", Assert.Single(answer.Headers.GetValues("X-Content-Type-Options")));
        Assert.Equal("DENY", Assert.Single(answer.Headers.GetValues("X-Frame-Options")));
        Assert.Equal("no-referrer", Assert.Single(answer.Headers.GetValues("Referrer-Policy")));
        Assert.False(answer.Headers.Contains("Server"));
    }

    [Fact]
    public async Task Asset_AskedForAgain_IsNotSentAgain()
    {
        using var first = await server.GetAsync("/assets/page.css");
        using var again = await server.GetAsync("/assets/page.css", request => request.Headers.IfNoneMatch.Add(first.Headers.ETag!));

        Assert.Equal((HttpStatusCode.OK, HttpStatusCode.NotModified), (first.StatusCode, again.StatusCode));
    }

    [Fact]
    public async Task Tables_AsJsonAndCsv_HaveTheCellsOfTheView()
    {
        // The worker goes on meanwhile: only tables between two equal views are those of the view.
        for (int attempt = 0; attempt < 30; attempt++)
        {
            var before = await TablesOfTheViewAsync();
            var answers = new Dictionary<string, (string Json, string Csv)>(StringComparer.Ordinal);
            foreach (var table in before.EnumerateObject())
            {
                string query = $"/data/tables/{table.Name}.{{0}}?window=30d&past=60d";
                answers[table.Name] = (await server.GetTextAsync(string.Format(null, query, "json")), await server.GetTextAsync(string.Format(null, query, "csv")));
            }
            if (before.GetRawText() != (await TablesOfTheViewAsync()).GetRawText())
            {
                // As many requests as this are let pass in two seconds.
                await Task.Delay(TimeSpan.FromSeconds(2), Cancellation);
                continue;
            }

            Assert.NotEmpty(answers);
            foreach (var table in before.EnumerateObject())
            {
                Assert.Equal(table.Value.GetRawText(), answers[table.Name].Json);
                string[] lines = answers[table.Name].Csv.Split("\r\n");
                Assert.Equal(string.Join(',', table.Value.GetProperty("columns").EnumerateArray().Select(column => column.GetProperty("key").GetString())), lines[0]);
                Assert.Equal(table.Value.GetProperty("rows").GetArrayLength(), lines.Length - 2);
            }
            return;
        }
        Assert.Fail("The view never stayed the same for as long as it takes to ask for its tables.");

        async Task<JsonElement> TablesOfTheViewAsync() =>
            JsonSerializer.Deserialize<JsonElement>(await server.GetTextAsync("/data/view?window=30d&past=60d")).GetProperty("tables");
    }

    [Fact]
    public async Task Events_Opened_GiveTheViewAtOnce()
    {
        using var answer = await server.Client.GetAsync(new Uri(server.Address + "/data/events?window=7d"), HttpCompletionOption.ResponseHeadersRead, Cancellation);
        using var reader = new StreamReader(await answer.Content.ReadAsStreamAsync(Cancellation));

        Assert.Equal("text/event-stream", answer.Content.Headers.ContentType!.MediaType);
        Assert.Equal("event: view", await reader.ReadLineAsync(Cancellation));
        string data = (await reader.ReadLineAsync(Cancellation))!;
        Assert.Equal("7d", JsonSerializer.Deserialize<JsonElement>(data["data: ".Length..]).GetProperty("choice").GetProperty("window").GetString());
    }

    [Fact]
    public async Task Requests_TooMany_AreRefusedForAWhile()
    {
        using var other = ServedStream.OfFerryTickets(records: 10);
        using var client = new HttpClient();
        HttpStatusCode last = HttpStatusCode.OK;
        for (int i = 0; i < 2_000 && last == HttpStatusCode.OK; i++)
        {
            using var answer = await client.GetAsync(new Uri(other.Address + "/assets/icon.svg"), Cancellation);
            last = answer.StatusCode;
            if (last == HttpStatusCode.TooManyRequests) Assert.NotNull(answer.Headers.RetryAfter);
        }

        Assert.Equal(HttpStatusCode.TooManyRequests, last);
    }

    [Fact]
    public async Task EventStreams_MoreThanSixtyFour_AreRefused()
    {
        using var other = ServedStream.OfFerryTickets(records: 10);
        using var client = new HttpClient();
        var open = new List<HttpResponseMessage>();
        for (int i = 0; i < 65; i++) open.Add(await client.GetAsync(new Uri(other.Address + "/data/events"), HttpCompletionOption.ResponseHeadersRead, Cancellation));

        Assert.Equal([.. Enumerable.Repeat(HttpStatusCode.OK, 64), HttpStatusCode.TooManyRequests], open.Select(answer => answer.StatusCode));
        foreach (var answer in open) answer.Dispose();
    }

    [Fact]
    public async Task Key_WhereThereIsOne_IsAskedOfEverything()
    {
        using var stream = ServedStream.OfFerryTickets(records: 10, Key);
        using var client = new HttpClient(new HttpClientHandler { AllowAutoRedirect = false });

        foreach (string path in new[] { "/data/view", "/data/events", "/data/tables/promised.csv", "/data/session", "/assets/page.js", "/nothing-here" })
        {
            using var refused = await client.GetAsync(new Uri(stream.Address + path), Cancellation);
            Assert.Equal((path, HttpStatusCode.Unauthorized), (path, refused.StatusCode));
        }
        using var page = await client.GetAsync(new Uri(stream.Address), Cancellation);
        Assert.Equal((HttpStatusCode.Redirect, "/login"), (page.StatusCode, page.Headers.Location?.OriginalString));
        client.DefaultRequestHeaders.Authorization = new AuthenticationHeaderValue("Bearer", Key + "x");
        using var wrong = await client.GetAsync(new Uri(stream.Address + "/data/view"), Cancellation);
        client.DefaultRequestHeaders.Authorization = new AuthenticationHeaderValue("Bearer", Key);
        using var right = await client.GetAsync(new Uri(stream.Address + "/data/view"), Cancellation);
        Assert.Equal((HttpStatusCode.Unauthorized, HttpStatusCode.OK), (wrong.StatusCode, right.StatusCode));
    }

    [Theory]
    [InlineData("/login?next=https%3A%2F%2Fevil.example", "/")]
    [InlineData("/login?window=7d&slice=%2F%2Fevil.example", "/?window=7d&slice=%2F%2Fevil.example")]
    public async Task Login_WithTheKey_LeadsToThePageAndNowhereElse(string path, string expected)
    {
        using var stream = ServedStream.OfFerryTickets(records: 10, Key);
        using var client = new HttpClient(new HttpClientHandler { AllowAutoRedirect = false, UseCookies = false });
        using var form = new FormUrlEncodedContent([new("key", Key)]);

        using var answer = await client.PostAsync(new Uri(stream.Address + path), form, Cancellation);

        Assert.Equal((HttpStatusCode.SeeOther, expected), (answer.StatusCode, answer.Headers.Location?.OriginalString));
        string cookie = Assert.Single(answer.Headers.GetValues("Set-Cookie"));
        Assert.All(new[] { "secure", "httponly", "samesite=strict", "path=/" }, part => Assert.Contains($"; {part}", cookie, StringComparison.Ordinal));
    }

    [Fact]
    public async Task Logins_TooMany_AreRefusedForAWhile()
    {
        using var stream = ServedStream.OfFerryTickets(records: 10, Key);
        using var client = new HttpClient(new HttpClientHandler { AllowAutoRedirect = false, UseCookies = false });
        var seen = new List<HttpStatusCode>();
        for (int i = 0; i < 11; i++)
        {
            using var form = new FormUrlEncodedContent([new("key", "wrong")]);
            using var answer = await client.PostAsync(new Uri(stream.Address + "/login"), form, Cancellation);
            seen.Add(answer.StatusCode);
            Assert.False(answer.Headers.Contains("Set-Cookie"));
        }

        Assert.Equal([.. Enumerable.Repeat(HttpStatusCode.SeeOther, 10), HttpStatusCode.TooManyRequests], seen);
    }

    /// <summary>A served demo stream that all tests look at.</summary>
    public sealed class Server : IDisposable
    {
        private readonly ServedStream _stream = ServedStream.OfFerryTickets(records: 6_000);

        public HttpClient Client { get; } = new();

        public string Address => _stream.Address;

        public async Task<HttpResponseMessage> GetAsync(string path, Action<HttpRequestMessage>? change = null)
        {
            using var request = new HttpRequestMessage(HttpMethod.Get, Address + path);
            change?.Invoke(request);
            return await Client.SendAsync(request, Cancellation);
        }

        public async Task<string> GetTextAsync(string path)
        {
            using var answer = await GetAsync(path);
            Assert.Equal((path, HttpStatusCode.OK), (path, answer.StatusCode));
            return await answer.Content.ReadAsStringAsync(Cancellation);
        }

        public void Dispose()
        {
            Client.Dispose();
            _stream.Dispose();
        }
    }
}
