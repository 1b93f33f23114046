"""The addresses of signing in: the sign-in library's views, under names and words of our own."""

from allauth.account import views as account
from allauth.mfa.base import views as mfa
from allauth.mfa.recovery_codes import views as recovery
from allauth.mfa.totp import views as totp
from django.urls import path

from ledger.pages.signing_in import views

urlpatterns = [
    path("sign-in/", account.login, name="account_login"),
    path("sign-in/again/", account.reauthenticate, name="account_reauthenticate"),
    path("sign-in/closed/", account.account_inactive, name="account_inactive"),
    path("sign-in/second/", mfa.authenticate, name="mfa_authenticate"),
    path("sign-in/second/again/", mfa.reauthenticate, name="mfa_reauthenticate"),
    path("sign-out/", account.logout, name="account_logout"),
    path("password/", account.password_change, name="account_change_password"),
    path("second-factor/", mfa.index, name="mfa_index"),
    path("second-factor/set-up/", totp.activate_totp, name="mfa_activate_totp"),
    path("second-factor/take-away/", totp.deactivate_totp, name="mfa_deactivate_totp"),
    path("second-factor/codes/", recovery.view_recovery_codes, name="mfa_view_recovery_codes"),
    path(
        "second-factor/codes/new/",
        recovery.generate_recovery_codes,
        name="mfa_generate_recovery_codes",
    ),
    path("card/", views.card, name="card"),
    path("c/<slug:slug>/devices/", views.devices, name="devices"),
    path("c/<slug:slug>/devices/<int:number>/end/", views.end_device, name="device_end"),
    path("c/<slug:slug>/members/<int:number>/card/", views.member_card, name="member_card"),
]
