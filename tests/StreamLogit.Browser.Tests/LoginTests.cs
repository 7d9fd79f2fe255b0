using Microsoft.Playwright;
using StreamLogit.Browser.Tests.Running;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Browser.Tests;

/// <summary>A page that asks for an access key, in a real browser.</summary>
public sealed class LoginTests(ChromiumFixture chromium)
{
    private const string Key = "a-key-that-nobody-guesses";

    [Fact]
    public async Task Login_WithTheWrongAndThenTheRightKey_ShowsThePage()
    {
        using var stream = ServedStream.OfFerryTickets(records: 3_000, Key);
        await using var watched = await chromium.OpenAsync();
        await watched.Page.GotoAsync(stream.Address + "/?window=30d&slice=channel%3Dweb");
        Assert.Equal(stream.Address + "/login?window=30d&slice=channel%3Dweb", watched.Page.Url);
        Assert.Empty(await watched.FindAxeViolationsAsync());

        await GiveAsync(watched.Page, "not-the-key-at-all");
        await watched.WaitForAsync("document.querySelector('[role=alert]')", "the refusal");
        Assert.Equal("That was not the key.", await watched.Page.InnerTextAsync("[role=alert]"));
        Assert.Empty(await watched.FindAxeViolationsAsync());
        await GiveAsync(watched.Page, Key);
        await watched.WaitForAsync("document.getElementById('link')?.dataset.state === 'live'", "the page to follow the stream");

        Assert.Equal(stream.Address + "/?window=30d&slice=channel%3Dweb", watched.Page.Url);
        var cookie = Assert.Single(await watched.Context.CookiesAsync());
        Assert.Equal((true, true, SameSiteAttribute.Strict), (cookie.HttpOnly, cookie.Secure, cookie.SameSite));
        Assert.DoesNotContain(Key, cookie.Value, StringComparison.Ordinal);
        Assert.Empty(watched.Complaints);
        await watched.Page.ClickAsync("#logout button");
        await watched.WaitForAsync("location.pathname === '/login'", "the form again");
        Assert.Empty(await watched.Context.CookiesAsync());
    }

    private static async Task GiveAsync(IPage page, string key)
    {
        await page.FillAsync("#key", key);
        await page.Keyboard.PressAsync("Enter");
    }
}
