using Microsoft.Playwright;

namespace StreamLogit.Browser.Tests.Running;

/// <summary>The pictures in docs, which tests that show the same take anew where they are asked to by an environment variable.</summary>
internal static class Pictures
{
    private static readonly bool AreWanted = Environment.GetEnvironmentVariable("STREAMLOGIT_PICTURES") is not (null or "");

    /// <summary>Takes a picture of the top of a page, or of all of it.</summary>
    public static async Task TakeAsync(IPage page, string name, int width, int? height = null)
    {
        if (!AreWanted) return;
        var clip = height is { } h ? new Clip { X = 0, Y = 0, Width = width, Height = h } : null;
        await page.ScreenshotAsync(new PageScreenshotOptions { Path = RepositoryFiles.At("docs", name), FullPage = true, Clip = clip });
    }
}
