"""``netaudit.toml``: what a repository says about its boards, once for every command."""
